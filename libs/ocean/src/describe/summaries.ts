import type {
  Entrainment,
  Island,
  Mooring,
  Section,
  Sponge,
  Start,
  ViscosityPatch,
  WesternCoast,
  WindComponent,
  WindPattern,
} from '../setup';
import { FIELDS } from './fields';
import { readable, readableDate, readableLatitude, readableLongitude } from './numbers';

const stress = (value: number) => `${readable(value, 4)} N/m²`;
const degrees = (value: number) => `${readable(value, 4)}°`;

/** A wind pattern in one line: "zonal belt, eastward −0.01 N/m² at 12° N, width 6°". */
export function patternSummary(pattern: WindPattern): string {
  const name = FIELDS['/wind/components/*/pattern/kind'].values?.[pattern.kind] ?? pattern.kind;
  switch (pattern.kind) {
    case 'uniform':
      return `${name}, eastward ${stress(pattern.eastwardNM2)}, northward ${stress(pattern.northwardNM2)}`;
    case 'zonalBelt':
      return `${name}, ${pattern.direction} ${stress(pattern.amplitudeNM2)} at ${readableLatitude(pattern.latitudeDeg)}, width ${degrees(pattern.widthDeg)}`;
    case 'gaussianPatch':
      return `${name}, ${pattern.direction} ${stress(pattern.amplitudeNM2)} at ${readableLongitude(pattern.longitudeDeg)} ${readableLatitude(pattern.latitudeDeg)}, widths ${degrees(pattern.widthLongitudeDeg)} and ${degrees(pattern.widthLatitudeDeg)}`;
    case 'linearShear':
      return `${name}, ${stress(pattern.stressNM2)} over ${readable(pattern.overDistanceKm, 5)} km, full within ${degrees(pattern.fullWithinDeg)}, zero beyond ${degrees(pattern.zeroBeyondDeg)}`;
  }
}

/** The season of a component in a few words: "steady", "yearly, peak 16 July". */
export function seasonSummary({ season }: Pick<WindComponent, 'season'>): string {
  const parts: string[] = [];
  if (season.mean !== 0)
    parts.push(season.switchOnDays > 0 ? `switched on over ${readable(season.switchOnDays, 4)} d` : 'steady');
  if (season.annual.amplitude !== 0) parts.push(`yearly, peak ${peakDate(season.annual, 365)}`);
  if (season.semiannual.amplitude !== 0) parts.push(`half-yearly, peak ${peakDate(season.semiannual, 182.5)}`);
  return parts.length > 0 ? parts.join(' and ') : 'none';
}

/** A negative amplitude peaks half a period away from its `peakDay`. */
function peakDate({ amplitude, peakDay }: { amplitude: number; peakDay: number }, periodDays: number): string {
  return readableDate(amplitude < 0 ? peakDay + periodDays / 2 : peakDay);
}

export function componentSummary(component: WindComponent): string {
  return `${patternSummary(component.pattern)}; season ${seasonSummary(component)}`;
}

export function coastSummary(coast: WesternCoast): string {
  if (coast.kind === 'rectangular') return 'straight';
  return `slanting from ${readableLongitude(coast.atSouthDeg)} in the south to ${readableLongitude(coast.atNorthDeg)} in the north`;
}

export function islandSummary(island: Island): string {
  if (island.kind === 'polygon') return `polygon of ${island.points.length} points`;
  return `${readableLongitude(island.westDeg)} to ${readableLongitude(island.eastDeg)}, ${readableLatitude(island.southDeg)} to ${readableLatitude(island.northDeg)}`;
}

/** A sponge in one line: "5° wide, rate 6.9 c/W, wind tapered". */
export function spongeSummary({ widthDeg, peakRatePerS, tapersWind }: Sponge): string {
  const rate = peakRatePerS === null ? '6.9 c/W' : `${readable(peakRatePerS, 3)} 1/s`;
  return `${degrees(widthDeg)} wide, rate ${rate}${tapersWind ? ', wind tapered' : ''}`;
}

export function viscosityPatchSummary(patch: ViscosityPatch): string {
  return `${readable(patch.addedM2S, 4)} m²/s added at ${readableLongitude(patch.longitudeDeg)} ${readableLatitude(patch.latitudeDeg)}, widths ${degrees(patch.widthLongitudeDeg)} and ${degrees(patch.widthLatitudeDeg)}`;
}

export function entrainmentSummary({ onsetThicknessM, timescaleDays, detrainment }: Entrainment): string {
  const back = detrainment === 'uniform' ? ', given back evenly' : '';
  return `below ${readable(onsetThicknessM, 4)} m in ${readable(timescaleDays, 4)} d${back}`;
}

export function coastSpacingSummary(spacing: { longitudeDeg: number; latitudeDeg: number }): string {
  return `${degrees(spacing.longitudeDeg)} × ${degrees(spacing.latitudeDeg)}`;
}

export function sectionSummary(section: Section): string {
  return section.along === 'latitude'
    ? `along ${readableLatitude(section.atDeg)}`
    : `along ${readableLongitude(section.atDeg)}`;
}

export function mooringSummary(mooring: Mooring): string {
  return `${readableLongitude(mooring.longitudeDeg)} ${readableLatitude(mooring.latitudeDeg)}`;
}

export function startSummary(start: Start): string {
  switch (start.kind) {
    case 'rest':
      return 'rest';
    case 'bump':
      return `bump of ${readable(start.amplitudeM, 4)} m at ${readableLongitude(start.longitudeDeg)} ${readableLatitude(start.latitudeDeg)}`;
    case 'step':
      return `step of ${readable(start.amplitudeM, 4)} m at ${readableLatitude(start.latitudeDeg)}`;
    case 'mode':
      return `${FIELDS['/start/mode'].values?.[start.mode] ?? start.mode} wave of ${readable(start.amplitudeM, 4)} m, ${degrees(start.wavelengthDeg)} long`;
    case 'state':
      return `last state of run ${start.runId.slice(0, 8)}, step ${readable(start.startStep, 9)}`;
  }
}
