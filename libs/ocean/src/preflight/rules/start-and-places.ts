import { readable, readableLatitude, readableLongitude } from '../../describe/numbers';
import type { Remedy } from '../../preflight-types';
import type { Basin } from '../../setup';
import { NO_CURE, ratioOfMaximum, type Case, type Rule } from '../draft';

/** A wave mode needs the equatorial plane, and that this rotates. */
export const startMode: Rule = ({ setup, scales }) => {
  const still = setup.basin.geometry === 'equatorial' && !(scales.beta > 0);
  if (setup.start.kind !== 'mode' || (setup.basin.geometry === 'equatorial' && !still)) return null;
  return {
    id: 'start-mode',
    label: 'Equatorial wave at the start',
    verdict: 'refuse',
    value: 1,
    limit: 0,
    unit: '',
    ratio: 2,
    reason: still
      ? 'An equatorial wave needs rotation, and β is 0 here; give β, or choose another start.'
      : 'An equatorial wave can start on the equatorial plane only; choose that plane, or another start.',
    pointers: ['/start/kind', still ? '/basin/betaPerMS' : '/basin/geometry'],
    cures: () => [{ label: 'Start from rest', changes: [{ pointer: '/start', value: { kind: 'rest' } }] }],
  };
};

/** In a periodic basin a wave must close on itself: whole wavelengths round the basin. */
export const wholeWaves: Rule = ({ setup, scales }) => {
  const { start, basin } = setup;
  if (start.kind !== 'mode' || !basin.zonallyPeriodic || basin.geometry !== 'equatorial') return null;
  const extent = scales.layout.nx * scales.layout.zonal.spacing;
  const waves = extent / start.wavelengthDeg;
  const nearest = Math.max(1, Math.round(waves));
  const off = Math.abs(waves - nearest);
  const limit = 1e-6;
  const ratio = ratioOfMaximum(off, limit);
  return {
    id: 'start-waves',
    label: 'Waves round the basin',
    verdict: ratio > 1 ? 'caution' : 'pass',
    value: off,
    limit,
    unit: 'waves',
    ratio,
    reason:
      ratio > 1
        ? `${readable(waves, 4)} wavelengths of ${readable(start.wavelengthDeg, 4)}° fit round the basin; with a fraction the wave breaks at the seam.`
        : `The basin is ${readable(waves, 4)} ${nearest === 1 ? 'wavelength' : 'wavelengths'} round.`,
    pointers: ['/start/wavelengthDeg', '/basin/eastDeg'],
    cures: () =>
      [nearest, nearest + 1]
        .map((count) => Number((extent / count).toPrecision(12)))
        .map((value) => ({
          label: `Use ${readable(value, 5)}°`,
          changes: [{ pointer: '/start/wavelengthDeg', value }],
        })),
  };
};

/** A state lies at a whole step of its own run; that must be a whole step of this run too. */
export const startStep: Rule = ({ setup }) => {
  const { start, numerics } = setup;
  if (start.kind !== 'state' || start.stepsPerDay === numerics.stepsPerDay) return null;
  const whole = Number.isInteger((start.startStep * numerics.stepsPerDay) / start.stepsPerDay);
  const day = readable(start.startStep / start.stepsPerDay, 6);
  return {
    id: 'start-step',
    label: 'Steps a day of the state',
    verdict: whole ? 'caution' : 'refuse',
    value: numerics.stepsPerDay,
    limit: start.stepsPerDay,
    unit: '1/d',
    ratio: whole ? 1.2 : 2,
    reason: whole
      ? `The state was made with ${start.stepsPerDay} steps a day: with ${numerics.stepsPerDay} its history is rebuilt by copies, so the run is no exact continuation.`
      : `The state lies at day ${day} of ${start.stepsPerDay} steps a day, which is no whole number of steps at ${numerics.stepsPerDay} a day.`,
    pointers: ['/numerics/stepsPerDay', '/start'],
    cures: () => [
      {
        label: `Use ${readable(start.stepsPerDay, 5)} a day`,
        changes: [{ pointer: '/numerics/stepsPerDay', value: start.stepsPerDay }],
      },
    ],
  };
};

/** Neither wind nor a start that moves: allowed, and dull. Shown only then. */
export const nothingMoves: Rule = ({ setup, wind }) => {
  const still = setup.start.kind === 'rest' || ('amplitudeM' in setup.start && setup.start.amplitudeM === 0);
  if (wind.stress > 0 || !still) return null;
  return {
    id: 'nothing-moves',
    label: 'Something that moves the layer',
    verdict: 'caution',
    value: 0,
    limit: 0,
    unit: 'N/m²',
    ratio: 2,
    reason: 'There is no wind and the layer starts from rest: nothing will move.',
    pointers: ['/wind/components', '/start/kind'],
    cures: NO_CURE,
  };
};

/** A plane without f, for example an f-plane that touches the sphere at the equator. */
export const noRotation: Rule = ({ setup, scales }) => {
  if (scales.beta !== 0 || scales.fMax !== 0) return null;
  const flat = setup.basin.geometry === 'fplane';
  const sphere = setup.basin.geometry === 'spherical';
  return {
    id: 'no-rotation',
    label: sphere ? 'Rotation of the sphere' : 'Rotation of the plane',
    verdict: 'caution',
    value: 0,
    limit: 0,
    unit: '1/s',
    ratio: 2,
    reason: flat
      ? 'f₀ is 0: this f-plane does not rotate. Give it a latitude of contact off the equator, or f₀ itself.'
      : sphere
        ? 'The rotation rate is 0: this sphere does not rotate. Give a rotation rate.'
        : 'f and β are 0 everywhere: this plane does not rotate. Give β, or a rotation rate.',
    pointers: flat
      ? ['/basin/referenceLatitudeDeg', '/basin/f0PerS']
      : [sphere ? '/constants/rotationRatePerS' : '/basin/betaPerMS'],
    cures: NO_CURE,
  };
};

/** Sections that meet no water: their transport is zero for ever. */
export const sectionsOnLand: Rule = (of) => {
  const { setup } = of;
  if (setup.output.sections.length === 0) return null;
  const dry = setup.output.sections.map((section, k) => ({ section, k })).filter(({ k }) => !sectionHasWater(of, k));
  const names = dry.map(({ section }) => `“${section.name}”`).join(', ');
  const wet = setup.output.sections.filter((_, k) => sectionHasWater(of, k));
  return {
    id: 'sections',
    label: 'Sections that meet water',
    verdict: dry.length > 0 ? 'caution' : 'pass',
    value: wet.length,
    limit: setup.output.sections.length,
    unit: 'sections',
    ratio: dry.length > 0 ? 1 + dry.length : 0,
    reason:
      dry.length > 0
        ? `${names} ${dry.length === 1 ? 'lies' : 'lie'} on land or on a wall from end to end and would carry nothing: move ${dry.length === 1 ? 'it' : 'them'} into the water.`
        : 'Every section meets water.',
    pointers: dry.length > 0 ? dry.map(({ k }) => `/output/sections/${k}/atDeg`) : ['/output/sections'],
    cures: () => [
      {
        label: dry.length === 1 ? `Leave out ${names}` : `Leave out ${dry.length} sections`,
        changes: [{ pointer: '/output/sections', value: wet }],
      },
    ],
  };
};

function sectionHasWater({ setup, land }: Case, k: number): boolean {
  const { along, atDeg } = setup.output.sections[k];
  const line = land.lineOf(along, atDeg);
  return along === 'latitude' ? land.rowHasWater(line) : land.columnHasWater(line);
}

/** Moorings on land have nothing to record: the core refuses them, so they are refused here by name. */
export const mooringsOnLand: Rule = ({ setup, scales, land }) => {
  const { moorings } = setup.output;
  if (moorings.length === 0) return null;
  const dry = moorings
    .map((mooring, k) => ({ mooring, k, cell: land.cellAt(mooring.longitudeDeg, mooring.latitudeDeg) }))
    .filter(({ cell }) => cell === null || !land.isWet(cell.i, cell.j));
  const names = dry.map(({ mooring }) => `“${mooring.name}”`).join(', ');
  return {
    id: 'moorings',
    label: 'Moorings in the water',
    verdict: dry.length > 0 ? 'refuse' : 'pass',
    value: moorings.length - dry.length,
    limit: moorings.length,
    unit: 'moorings',
    ratio: dry.length > 0 ? 1 + dry.length : 0,
    reason:
      dry.length > 0
        ? `${names} ${dry.length === 1 ? 'lies' : 'lie'} on land: move ${dry.length === 1 ? 'it' : 'them'} into the water.`
        : 'Every mooring lies in water.',
    pointers:
      dry.length > 0
        ? dry.flatMap(({ k }) => [`/output/moorings/${k}/longitudeDeg`, `/output/moorings/${k}/latitudeDeg`])
        : ['/output/moorings'],
    cures: (): Remedy[] => {
      const moves = dry.flatMap(({ k, cell }) => {
        const water = cell && land.nearestWater(cell.i, cell.j, scales.dx, scales.dy);
        return water ? [{ k, at: placeIn(land, setup.basin, water.i, water.j) }] : [];
      });
      if (moves.length === 0) return [];
      const [first] = moves;
      const where = `${readableLongitude(first.at.longitude)} ${readableLatitude(first.at.latitude)}`;
      return [
        {
          label: moves.length === 1 ? `Move to ${where}` : `Move ${moves.length} into the water`,
          changes: moves.flatMap(({ k, at }) => [
            { pointer: `/output/moorings/${k}/longitudeDeg`, value: at.longitude },
            { pointer: `/output/moorings/${k}/latitudeDeg`, value: at.latitude },
          ]),
        },
      ];
    },
  };
};

/** A place in a cell and in the basin: its centre, with as few decimals as still lie in it. */
function placeIn(land: Case['land'], basin: Basin, i: number, j: number): { longitude: number; latitude: number } {
  const within = (value: number, low: number, high: number) => Math.min(Math.max(value, low), high);
  const longitude = within(land.longitudeOf(i), basin.westDeg, basin.eastDeg);
  const latitude = within(land.latitudeOf(j), basin.southDeg, basin.northDeg);
  for (let decimals = 2; decimals < 9; decimals++) {
    const [x, y] = [Number(longitude.toFixed(decimals)), Number(latitude.toFixed(decimals))];
    const cell = land.cellAt(x, y);
    const inBasin = x >= basin.westDeg && x <= basin.eastDeg && y >= basin.southDeg && y <= basin.northDeg;
    if (inBasin && cell?.i === i && cell.j === j) return { longitude: x, latitude: y };
  }
  return { longitude, latitude };
}
