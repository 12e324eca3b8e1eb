import {
  DEFAULT_CONSTANTS,
  LIMITS,
  type Entrainment,
  type Island,
  type Mooring,
  type Section,
  type Setup,
  type Sponge,
  type Start,
  type ViscosityPatch,
  type WindComponent,
  type WindPattern,
} from '@halfdeep/ocean';

/** A closed basin about the equator, at rest and without wind, every number its default in LIMITS. */
export function blankSetup(): Setup {
  return {
    schemaVersion: 1,
    constants: { ...DEFAULT_CONSTANTS },
    basin: {
      name: '',
      geometry: 'equatorial',
      westDeg: LIMITS.longitude.default,
      eastDeg: LIMITS.longitude.default + LIMITS.zonalExtent.default,
      southDeg: -17.5,
      northDeg: 17.5,
      referenceLatitudeDeg: null,
      f0PerS: null,
      betaPerMS: null,
      zonallyPeriodic: false,
      westernCoast: { kind: 'rectangular' },
      islands: [],
      sponges: [],
      coastSpacing: null,
    },
    layer: {
      reducedGravityMS2: LIMITS.reducedGravity.default,
      restThicknessM: LIMITS.restThickness.default,
      dampingPerS: LIMITS.damping.default,
      temperatureStepK: LIMITS.temperatureStep.default,
      minimumThicknessM: LIMITS.minimumThickness.default,
      entrainment: null,
    },
    wind: { components: [], seasonalStrength: LIMITS.seasonalStrength.default, stressFloorM: 0 },
    start: { kind: 'rest' },
    friction: {
      rayleighPerS: LIMITS.rayleigh.default,
      viscosityM2S: LIMITS.viscosity.default,
      viscosityPatches: [],
      slip: 'free',
    },
    numerics: {
      equations: 'linear',
      spacingLongitudeDeg: LIMITS.spacing.default,
      spacingLatitudeDeg: LIMITS.spacing.default,
      stepsPerDay: LIMITS.stepsPerDay.default,
    },
    length: { days: LIMITS.lengthDays.default },
    output: {
      sections: [],
      moorings: [],
      frameIntervalDays: LIMITS.outputInterval.default,
      sectionIntervalDays: LIMITS.outputInterval.default,
      mooringIntervalDays: 1,
      momentumBudget: false,
      vorticityBudget: false,
    },
  };
}

type Frame = Pick<Setup, 'basin'>;
const rounded = (degrees: number) => Math.round(degrees * 100) / 100;
const middle = ({ basin }: Frame) => ({
  longitudeDeg: rounded((basin.westDeg + basin.eastDeg) / 2),
  latitudeDeg: rounded((basin.southDeg + basin.northDeg) / 2),
});

/** A name that none of the list has: "Island 2". */
export function freshName(stem: string, taken: readonly { name: string }[]): string {
  for (let k = taken.length + 1; ; k++) {
    const name = `${stem} ${k}`;
    if (!taken.some((item) => item.name === name)) return name;
  }
}

/** A box of a twentieth of the basin in its middle. */
export function newIsland(setup: Setup, kind: Island['kind']): Island {
  const { longitudeDeg, latitudeDeg } = middle(setup);
  const { basin } = setup;
  const [dx, dy] = [rounded((basin.eastDeg - basin.westDeg) / 40), rounded((basin.northDeg - basin.southDeg) / 40)];
  const name = freshName('Island', basin.islands);
  if (kind === 'box')
    return {
      kind,
      name,
      westDeg: rounded(longitudeDeg - dx),
      eastDeg: rounded(longitudeDeg + dx),
      southDeg: rounded(latitudeDeg - dy),
      northDeg: rounded(latitudeDeg + dy),
    };
  return {
    kind,
    name,
    points: [
      [rounded(longitudeDeg - dx), rounded(latitudeDeg - dy)],
      [rounded(longitudeDeg + dx), rounded(latitudeDeg - dy)],
      [longitudeDeg, rounded(latitudeDeg + dy)],
    ],
  };
}

/** A pattern of another kind that keeps the stress and the direction of the one before. */
export function newPattern(kind: WindPattern['kind'], setup: Frame, before?: WindPattern): WindPattern {
  const stress =
    before === undefined
      ? LIMITS.stress.default
      : before.kind === 'uniform'
        ? before.eastwardNM2 || before.northwardNM2
        : before.kind === 'linearShear'
          ? before.stressNM2
          : before.amplitudeNM2;
  const direction = before && 'direction' in before ? before.direction : 'eastward';
  const { longitudeDeg, latitudeDeg } = middle(setup);
  const width = LIMITS.windLength.default;
  switch (kind) {
    case 'uniform':
      return direction === 'northward'
        ? { kind, eastwardNM2: 0, northwardNM2: stress }
        : { kind, eastwardNM2: stress, northwardNM2: 0 };
    case 'zonalBelt':
      return { kind, direction, amplitudeNM2: stress, latitudeDeg, widthDeg: width };
    case 'gaussianPatch':
      return {
        kind,
        direction,
        amplitudeNM2: stress,
        longitudeDeg,
        latitudeDeg,
        widthLongitudeDeg: width,
        widthLatitudeDeg: width,
      };
    case 'linearShear':
      return {
        kind,
        stressNM2: stress,
        overDistanceKm: LIMITS.windDistance.default,
        fullWithinDeg: 10,
        zeroBeyondDeg: 15,
      };
  }
}

/** A steady belt; its season is edited in place. */
export function newWindComponent(setup: Setup): WindComponent {
  return {
    name: freshName('Wind', setup.wind.components),
    pattern: newPattern('zonalBelt', setup),
    season: {
      mean: LIMITS.seasonFactor.default,
      switchOnDays: LIMITS.switchOn.default,
      annual: { amplitude: 0, peakDay: LIMITS.peakDay.default },
      semiannual: { amplitude: 0, peakDay: LIMITS.peakDay.default },
    },
  };
}

/** A start of another kind, in the middle of the basin; a state needs a run, which the form asks for. */
export function newStart(kind: Exclude<Start['kind'], 'state'>, setup: Frame): Start {
  const amplitudeM = LIMITS.startAmplitude.default;
  const { longitudeDeg, latitudeDeg } = middle(setup);
  const width = LIMITS.startLength.default;
  switch (kind) {
    case 'rest':
      return { kind };
    case 'bump':
      return { kind, amplitudeM, longitudeDeg, latitudeDeg, widthLongitudeDeg: width, widthLatitudeDeg: width };
    case 'step':
      return { kind, amplitudeM, latitudeDeg };
    case 'mode':
      return {
        kind,
        mode: 'kelvin',
        amplitudeM,
        wavelengthDeg: rounded((setup.basin.eastDeg - setup.basin.westDeg) / 2),
        crestLongitudeDeg: longitudeDeg,
      };
  }
}

export function newSection(setup: Setup): Section {
  const { latitudeDeg } = middle(setup);
  return { name: freshName('Section', setup.output.sections), along: 'latitude', atDeg: latitudeDeg };
}

/** A sponge at the first edge that is free, a tenth of the basin wide and no more than 5°; null when every edge has one. */
export function newSponge({ basin }: Frame): Sponge | null {
  const edge = freeEdges(basin)[0];
  if (edge === undefined) return null;
  const zonal = edge === 'west' || edge === 'east';
  const extent = zonal ? basin.eastDeg - basin.westDeg : basin.northDeg - basin.southDeg;
  const widthDeg = Math.max(LIMITS.spongeWidth.min, Math.min(LIMITS.spongeWidth.default, rounded(extent / 10)));
  return { edge, widthDeg, peakRatePerS: null, tapersWind: true };
}

/** Edges of a basin without a sponge; a periodic one has no west and no east edge. */
export function freeEdges({ zonallyPeriodic, sponges }: Setup['basin']): Sponge['edge'][] {
  const edges: Sponge['edge'][] = zonallyPeriodic ? ['south', 'north'] : ['south', 'north', 'west', 'east'];
  return edges.filter((edge) => !sponges.some((sponge) => sponge.edge === edge));
}

/** A place of twice the basin's viscosity in its middle, a tenth of the basin wide. */
export function newViscosityPatch(setup: Setup): ViscosityPatch {
  const { basin, friction } = setup;
  return {
    name: freshName('Place', friction.viscosityPatches),
    addedM2S: friction.viscosityM2S || LIMITS.addedViscosity.default,
    ...middle(setup),
    widthLongitudeDeg: rounded((basin.eastDeg - basin.westDeg) / 10),
    widthLatitudeDeg: rounded((basin.northDeg - basin.southDeg) / 10),
  };
}

/** Entrainment with the defaults of its fields, no thicker than 0.3 H. */
export function newEntrainment({ restThicknessM, minimumThicknessM }: Setup['layer']): Entrainment {
  const onset = Math.min(LIMITS.entrainmentOnset.default, 0.3 * restThicknessM);
  return {
    onsetThicknessM: Math.max(minimumThicknessM, rounded(onset)),
    timescaleDays: LIMITS.entrainmentTime.default,
    detrainment: 'none',
  };
}

/** The default of the minimum thickness beside a thickness at rest: min(20, H/10) m. */
export function defaultMinimumThickness(restThicknessM: number): number {
  return Math.min(LIMITS.minimumThickness.default, rounded(restThicknessM / 10));
}

export function newMooring(setup: Setup): Mooring {
  return { name: freshName('Mooring', setup.output.moorings), ...middle(setup) };
}
