import { cos, sin } from '../exact/elementary';
import type { Basin, Season, Setup, Wind } from '../setup';
import { evaluatePattern, type Stress } from './pattern';
import { windTaper } from './sponges';

/** Days of the model year (CF calendar `365_day`). */
export const DAYS_PER_YEAR = 365;
export const SECONDS_PER_DAY = 86_400;

/** sin²(π/2 · day/switchOnDays) up to switchOnDays after day 0, then 1; 1 throughout when switchOnDays is 0. */
export function ramp(day: number, switchOnDays: number): number {
  if (day >= switchOnDays) return 1;
  if (day <= 0) return 0;
  const rise = sin(((Math.PI / 2) * day) / switchOnDays);
  return rise * rise;
}

/** cos(2π k (t − peakDay)/365 d), k = 1 annual, 2 semiannual; yearFraction = t / 365 d, any whole number of years apart. */
export function harmonic(yearFraction: number, peakDay: number, k: 1 | 2): number {
  return cos(2 * Math.PI * k * (yearFraction - peakDay / DAYS_PER_YEAR));
}

/**
 * The factor on a component's pattern at model day `day`: mean · ramp + s (annual + semiannual), s the seasonal
 * strength. For diagrams; the stepper takes its phase from whole steps (`windForcing`).
 */
export function seasonFactor(season: Season, day: number, seasonalStrength: number): number {
  const fraction = day / DAYS_PER_YEAR - Math.floor(day / DAYS_PER_YEAR);
  const { annual, semiannual } = season;
  return (
    season.mean * ramp(day, season.switchOnDays) +
    seasonalStrength *
      (annual.amplitude * harmonic(fraction, annual.peakDay, 1) +
        semiannual.amplitude * harmonic(fraction, semiannual.peakDay, 2))
  );
}

/** Stress of the whole wind of a setup at a place and model day, as sponges leave it, N/m². */
export function stressAt(
  setup: { wind: Wind; basin: Basin; constants: Pick<Setup['constants'], 'earthRadiusM'> },
  longitudeDeg: number,
  latitudeDeg: number,
  day: number,
): Stress {
  const total = { taux: 0, tauy: 0 };
  for (const { pattern, season } of setup.wind.components) {
    const factor = seasonFactor(season, day, setup.wind.seasonalStrength);
    const stress = evaluatePattern(pattern, longitudeDeg, latitudeDeg, setup.constants.earthRadiusM);
    total.taux += factor * stress.taux;
    total.tauy += factor * stress.tauy;
  }
  const left = windTaper(setup.basin)?.at(longitudeDeg, latitudeDeg) ?? 1;
  return { taux: left * total.taux, tauy: left * total.tauy };
}
