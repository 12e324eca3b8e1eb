import { type Variable } from '@halfdeep/ocean';
import { type LineAlong } from '../core/slices';
import { isVariable } from '../shared/plate/variables';

/** What the two runs are looked at with: kept in the address, so that a colleague sees the same. */
export interface SharedPlace {
  mode: 'map' | 'hovmoller';
  variable: Variable;
  /** Model day of the maps; null: the last that both have. */
  day: number | null;
  along: LineAlong;
  /** Degrees of the line; null: the equator, or the middle of the basin. */
  at: number | null;
}

export type PlaceQuery = Partial<Record<'mode' | 'variable' | 'day' | 'along' | 'at', string | undefined>>;

/** Reads the address; what it does not say, or says wrongly, falls back to the default. */
export function placeFromQuery(query: PlaceQuery): SharedPlace {
  return {
    mode: query.mode === 'hovmoller' ? 'hovmoller' : 'map',
    variable: isVariable(query.variable) ? query.variable : 'eta',
    day: numberOf(query.day),
    along: query.along === 'longitude' ? 'longitude' : 'latitude',
    at: numberOf(query.at),
  };
}

/** The other way; defaults are left out of the address. */
export function placeToQuery(place: SharedPlace): Record<string, string | null> {
  return {
    mode: place.mode === 'map' ? null : place.mode,
    variable: place.variable,
    day: place.day === null ? null : String(place.day),
    along: place.along === 'latitude' ? null : place.along,
    at: place.at === null ? null : String(place.at),
  };
}

function numberOf(text: string | undefined): number | null {
  if (text === undefined || text.trim() === '') return null;
  const value = Number(text);
  return Number.isFinite(value) ? value : null;
}
