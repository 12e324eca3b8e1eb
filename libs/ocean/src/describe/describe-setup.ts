import type { Setup, WindComponent } from '../setup';
import { FIELDS } from './fields';
import { readable } from './numbers';
import { seasonSummary } from './summaries';

/** Basin, layer and season of a setup, each in a few words, for lists. */
export interface SetupDescription {
  basin: string;
  layer: string;
  season: string;
}

/** What an experiment is about at a glance: "60° × 35°, equatorial plane, slanting coast, 1 island". */
export function describeSetup(setup: Setup): SetupDescription {
  const { basin, layer } = setup;
  const c = Math.sqrt(layer.reducedGravityMS2 * layer.restThicknessM);
  const basinParts = [
    `${readable(basin.eastDeg - basin.westDeg, 4)}° × ${readable(basin.northDeg - basin.southDeg, 4)}°`,
    FIELDS['/basin/geometry'].values?.[basin.geometry] ?? basin.geometry,
  ];
  if (basin.zonallyPeriodic) basinParts.push('periodic');
  if (basin.westernCoast.kind === 'slanting') basinParts.push('slanting coast');
  if (basin.islands.length > 0) basinParts.push(count(basin.islands.length, 'island'));
  if (basin.sponges.length > 0) basinParts.push(count(basin.sponges.length, 'sponge'));
  const layerParts = [
    `H ${readable(layer.restThicknessM, 4)} m`,
    `g′ ${readable(layer.reducedGravityMS2, 3)} m/s²`,
    `c ${readable(c, 3)} m/s`,
  ];
  if (layer.dampingPerS > 0) layerParts.push(`damped in ${readable(1 / layer.dampingPerS / 86_400, 3)} d`);
  if (setup.numerics.equations === 'nonlinear') {
    layerParts.push('nonlinear');
    if (layer.entrainment) layerParts.push(`entrains below ${readable(layer.entrainment.onsetThicknessM, 4)} m`);
  }
  return { basin: basinParts.join(', '), layer: layerParts.join(', '), season: seasonWords(setup) };
}

function seasonWords(setup: Setup): string {
  const { components, seasonalStrength } = setup.wind;
  const groups = new Map<string, WindComponent[]>();
  for (const component of components) {
    const season = seasonSummary(component);
    if (season !== 'none') groups.set(season, [...(groups.get(season) ?? []), component]);
  }
  if (groups.size === 0) return 'no wind';
  const seasonal = (component: WindComponent) =>
    component.season.annual.amplitude !== 0 || component.season.semiannual.amplitude !== 0;
  const parts = [...groups.entries()]
    .sort(([, a], [, b]) => Number(seasonal(b[0])) - Number(seasonal(a[0])))
    .map(([season, members]) => {
      const who = members.length === 1 && members[0].name ? members[0].name : count(members.length, 'component');
      const factor = seasonal(members[0]) && seasonalStrength !== 1 ? ` × ${readable(seasonalStrength, 4)}` : '';
      return `${who}${factor} ${season}`;
    });
  return parts.join('; ');
}

function count(n: number, word: string): string {
  return `${n} ${word}${n === 1 ? '' : 's'}`;
}
