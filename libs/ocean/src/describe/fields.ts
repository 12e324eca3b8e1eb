import { LIMITS } from '../limits';

/** What a setup field is called, in which unit, and how its values read. */
export interface FieldWords {
  label: string;
  unit: string;
  /** Decimals that a change shows at least: grid spacings "0.20 → 0.10". */
  decimals?: number;
  /** Words for the values of a choice. */
  values?: Record<string, string>;
  /** Word for null. */
  whenNull?: string;
}

const fromLimit = (name: keyof typeof LIMITS, label?: string, decimals?: number): FieldWords => ({
  label: label ?? LIMITS[name].label,
  unit: LIMITS[name].unit,
  ...(decimals === undefined ? {} : { decimals }),
});
const longitude = (label: string): FieldWords => ({ label, unit: '° E' });
const latitude = (label: string): FieldWords => ({ label, unit: '° N' });
const words = (label: string, values?: Record<string, string>): FieldWords => ({
  label,
  unit: '',
  ...(values ? { values } : {}),
});

const harmonic = (pointer: string, label: string): Record<string, FieldWords> => ({
  [pointer]: words(`${label} harmonic`),
  [`${pointer}/amplitude`]: fromLimit('seasonFactor', `${label} amplitude`, 2),
  [`${pointer}/peakDay`]: fromLimit('peakDay', `${label} day of peak`),
});

const direction = words('Direction', { eastward: 'eastward', northward: 'northward' });

/** Every field of a setup by its JSON pointer, list positions written as "*". */
export const FIELDS: Record<string, FieldWords> = {
  '': words('Setup'),
  '/schemaVersion': words('Version of the setup format'),
  '/constants': words('Constants'),
  '/constants/earthRadiusM': fromLimit('earthRadius'),
  '/constants/rotationRatePerS': { label: LIMITS.rotationRate.label, unit: 'rad/s' },
  '/constants/gravityMS2': { label: LIMITS.gravity.label, unit: 'm/s²' },
  '/constants/densityKgM3': fromLimit('density', 'Density ρ0'),
  '/constants/heatCapacityJM3K': fromLimit('heatCapacity'),

  '/basin': words('Basin'),
  '/basin/name': words('Name of the water'),
  '/basin/geometry': words('Geometry', {
    equatorial: 'equatorial plane',
    midlatitude: 'mid-latitude plane',
    fplane: 'f-plane',
    spherical: 'spherical band',
  }),
  '/basin/westDeg': longitude('West edge'),
  '/basin/eastDeg': longitude('East edge'),
  '/basin/southDeg': latitude('South edge'),
  '/basin/northDeg': latitude('North edge'),
  '/basin/referenceLatitudeDeg': { ...latitude('Reference latitude'), whenNull: 'middle of the basin' },
  '/basin/f0PerS': { ...fromLimit('coriolis'), whenNull: 'from the latitude' },
  '/basin/betaPerMS': { ...fromLimit('beta'), whenNull: 'from the latitude' },
  '/basin/zonallyPeriodic': words('East and west', { true: 'periodic', false: 'closed' }),
  '/basin/westernCoast': words('Western coast'),
  '/basin/westernCoast/kind': words('Western coast', { rectangular: 'straight', slanting: 'slanting' }),
  '/basin/westernCoast/atSouthDeg': longitude('Coast at the south edge'),
  '/basin/westernCoast/atNorthDeg': longitude('Coast at the north edge'),
  '/basin/islands': words('Islands'),
  '/basin/islands/*': words('Island'),
  '/basin/islands/*/kind': words('Shape', { box: 'box', polygon: 'polygon' }),
  '/basin/islands/*/name': words('Name'),
  '/basin/islands/*/westDeg': longitude('West edge'),
  '/basin/islands/*/eastDeg': longitude('East edge'),
  '/basin/islands/*/southDeg': latitude('South edge'),
  '/basin/islands/*/northDeg': latitude('North edge'),
  '/basin/islands/*/points': words('Points'),
  '/basin/islands/*/points/*': words('Point'),
  '/basin/sponges': words('Sponges'),
  '/basin/sponges/*': words('Sponge'),
  '/basin/sponges/*/edge': words('Edge', { west: 'west', east: 'east', south: 'south', north: 'north' }),
  '/basin/sponges/*/widthDeg': fromLimit('spongeWidth', 'Width'),
  '/basin/sponges/*/peakRatePerS': { ...fromLimit('spongeRate', 'Rate at the edge'), whenNull: '6.9 c/W' },
  '/basin/sponges/*/tapersWind': words('Wind inside', { true: 'tapered', false: 'as outside' }),
  '/basin/coastSpacing': { ...words('Grid of the coast'), whenNull: 'the run’s own' },
  '/basin/coastSpacing/longitudeDeg': fromLimit('spacing', 'Spacing of the coast in longitude', 2),
  '/basin/coastSpacing/latitudeDeg': fromLimit('spacing', 'Spacing of the coast in latitude', 2),

  '/layer': words('Layer'),
  '/layer/reducedGravityMS2': fromLimit('reducedGravity', undefined, 3),
  '/layer/restThicknessM': fromLimit('restThickness'),
  '/layer/dampingPerS': fromLimit('damping'),
  '/layer/temperatureStepK': fromLimit('temperatureStep', undefined, 1),
  '/layer/minimumThicknessM': fromLimit('minimumThickness'),
  '/layer/entrainment': words('Entrainment'),
  '/layer/entrainment/onsetThicknessM': fromLimit('entrainmentOnset'),
  '/layer/entrainment/timescaleDays': fromLimit('entrainmentTime'),
  '/layer/entrainment/detrainment': words('Given back', { none: 'nothing', uniform: 'evenly over the basin' }),

  '/wind': words('Wind'),
  '/wind/seasonalStrength': { ...fromLimit('seasonalStrength', undefined, 2), unit: '' },
  '/wind/stressFloorM': fromLimit('stressFloor'),
  '/wind/components': words('Wind components'),
  '/wind/components/*': words('Wind component'),
  '/wind/components/*/name': words('Name'),
  '/wind/components/*/pattern': words('Pattern'),
  '/wind/components/*/pattern/kind': words('Pattern', {
    uniform: 'uniform',
    zonalBelt: 'zonal belt',
    gaussianPatch: 'Gaussian patch',
    linearShear: 'linear shear across the equator',
  }),
  '/wind/components/*/pattern/eastwardNM2': fromLimit('stress', 'Eastward stress', 3),
  '/wind/components/*/pattern/northwardNM2': fromLimit('stress', 'Northward stress', 3),
  '/wind/components/*/pattern/direction': direction,
  '/wind/components/*/pattern/amplitudeNM2': fromLimit('stress', 'Stress', 3),
  '/wind/components/*/pattern/stressNM2': fromLimit('stress', 'Stress', 3),
  '/wind/components/*/pattern/longitudeDeg': longitude('Centre longitude'),
  '/wind/components/*/pattern/latitudeDeg': latitude('Centre latitude'),
  '/wind/components/*/pattern/widthDeg': fromLimit('windLength', 'Width'),
  '/wind/components/*/pattern/widthLongitudeDeg': fromLimit('windLength', 'Width in longitude'),
  '/wind/components/*/pattern/widthLatitudeDeg': fromLimit('windLength', 'Width in latitude'),
  '/wind/components/*/pattern/overDistanceKm': fromLimit('windDistance'),
  '/wind/components/*/pattern/fullWithinDeg': { label: 'Full within', unit: '°' },
  '/wind/components/*/pattern/zeroBeyondDeg': { label: 'Zero beyond', unit: '°' },
  '/wind/components/*/season': words('Season'),
  '/wind/components/*/season/mean': fromLimit('seasonFactor', 'Steady part', 2),
  '/wind/components/*/season/switchOnDays': fromLimit('switchOn'),
  ...harmonic('/wind/components/*/season/annual', 'Annual'),
  ...harmonic('/wind/components/*/season/semiannual', 'Semiannual'),

  '/start': words('Start'),
  '/start/kind': words('Start', {
    rest: 'rest',
    bump: 'Gaussian bump',
    step: 'step',
    mode: 'equatorial wave',
    state: 'last state of a run',
  }),
  '/start/amplitudeM': fromLimit('startAmplitude'),
  '/start/longitudeDeg': longitude('Start longitude'),
  '/start/latitudeDeg': latitude('Start latitude'),
  '/start/widthLongitudeDeg': fromLimit('startLength', 'Start width in longitude'),
  '/start/widthLatitudeDeg': fromLimit('startLength', 'Start width in latitude'),
  '/start/mode': words('Wave', {
    kelvin: 'Kelvin',
    rossby1: 'Rossby n = 1',
    rossby2: 'Rossby n = 2',
    mixedWest: 'mixed Rossby-gravity, westward',
    mixedEast: 'mixed Rossby-gravity, eastward',
    gravity1West: 'inertia-gravity n = 1, westward',
    gravity1East: 'inertia-gravity n = 1, eastward',
  }),
  '/start/wavelengthDeg': fromLimit('startLength', 'Wavelength'),
  '/start/crestLongitudeDeg': longitude('Longitude of the crest'),
  '/start/runId': words('Run that the state comes from'),
  '/start/fingerprint': words('Fingerprint of that run'),
  '/start/stateSha256': words('Name of the state'),
  '/start/startStep': words('Step of the state'),
  '/start/stepsPerDay': words('Steps a day of the state'),

  '/friction': words('Friction'),
  '/friction/rayleighPerS': fromLimit('rayleigh'),
  '/friction/viscosityM2S': fromLimit('viscosity'),
  '/friction/viscosityPatches': words('Places of other viscosity'),
  '/friction/viscosityPatches/*': words('Place of other viscosity'),
  '/friction/viscosityPatches/*/name': words('Name'),
  '/friction/viscosityPatches/*/addedM2S': fromLimit('addedViscosity'),
  '/friction/viscosityPatches/*/longitudeDeg': longitude('Centre longitude'),
  '/friction/viscosityPatches/*/latitudeDeg': latitude('Centre latitude'),
  '/friction/viscosityPatches/*/widthLongitudeDeg': fromLimit('windLength', 'Width in longitude'),
  '/friction/viscosityPatches/*/widthLatitudeDeg': fromLimit('windLength', 'Width in latitude'),
  '/friction/slip': words('Coast', { free: 'free slip', none: 'no slip' }),

  '/numerics': words('Numerics'),
  '/numerics/equations': words('Equations', { linear: 'linear', nonlinear: 'nonlinear' }),
  '/numerics/spacingLongitudeDeg': fromLimit('spacing', 'Grid spacing in longitude', 2),
  '/numerics/spacingLatitudeDeg': fromLimit('spacing', 'Grid spacing in latitude', 2),
  // The unit is in the label.
  '/numerics/stepsPerDay': words(LIMITS.stepsPerDay.label),

  '/length': words('Length'),
  '/length/days': fromLimit('lengthDays'),

  '/output': words('Output'),
  '/output/sections': words('Sections'),
  '/output/sections/*': words('Section'),
  '/output/sections/*/name': words('Name'),
  '/output/sections/*/along': words('Direction', {
    latitude: 'along a latitude',
    longitude: 'along a longitude',
  }),
  '/output/sections/*/atDeg': { label: 'Position', unit: '°' },
  '/output/moorings': words('Moorings'),
  '/output/moorings/*': words('Mooring'),
  '/output/moorings/*/name': words('Name'),
  '/output/moorings/*/longitudeDeg': longitude('Longitude'),
  '/output/moorings/*/latitudeDeg': latitude('Latitude'),
  '/output/frameIntervalDays': fromLimit('outputInterval', 'Frame interval'),
  '/output/sectionIntervalDays': fromLimit('outputInterval', 'Section and budget interval'),
  '/output/mooringIntervalDays': fromLimit('outputInterval', 'Mooring interval'),
  '/output/momentumBudget': words('Momentum budget', { true: 'kept', false: 'not kept' }),
  '/output/vorticityBudget': words('Vorticity budget', { true: 'kept', false: 'not kept' }),
};

/** Lists of a setup whose members carry a name (a sponge: its edge), and the word for one member. */
export const NAMED_LISTS: Record<string, string> = {
  '/basin/islands': 'island',
  '/basin/sponges': 'sponge',
  '/wind/components': 'wind component',
  '/friction/viscosityPatches': 'place of other viscosity',
  '/output/sections': 'section',
  '/output/moorings': 'mooring',
};

/** A pointer with list positions written as "*". */
export function patternOf(pointer: string): string {
  return pointer.replace(/\/\d+(?=\/|$)/g, '/*');
}
