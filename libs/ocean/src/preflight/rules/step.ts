import { readable } from '../../describe/numbers';
import { ratioOfMaximum, verdictOf, type Rule } from '../draft';
import { stepRemedies } from '../remedies';
import { stepNumbers, STEP_LIMITS } from '../step-limits';

const STEP_POINTERS = ['/numerics/stepsPerDay', '/numerics/spacingLongitudeDeg', '/numerics/spacingLatitudeDeg'];

/** numerics.md §5: c dt √(1/dx² + 1/dy²). */
export const stepAgainstGravity: Rule = ({ setup, scales }) => {
  const { S, S0 } = stepNumbers(scales.rates, scales.dt);
  const limit = STEP_LIMITS.gravityCaution / scales.rates.gravity;
  const ratio = ratioOfMaximum(S, STEP_LIMITS.gravityCaution);
  const refused = S > S0;
  const steps = `${readable(scales.dt, 4)} s`;
  const highest = readable(S0 / scales.rates.gravity, 4);
  return {
    id: 'step-gravity',
    label: 'Step against gravity waves',
    verdict: verdictOf(ratio, refused),
    value: scales.dt,
    limit,
    unit: 's',
    ratio,
    reason: refused
      ? `${steps} must be below ${highest} s, beyond which gravity waves blow up on this grid (S ${readable(S)} of ${S0}).`
      : ratio > 1
        ? `${steps} is close to ${highest} s, where gravity waves blow up; best below ${readable(limit, 4)} s.`
        : `${steps} is within ${readable(limit, 4)} s (S ${readable(S)} of ${STEP_LIMITS.gravityCaution}).`,
    pointers: [...STEP_POINTERS, '/layer/reducedGravityMS2', '/layer/restThicknessM'],
    cures: () => stepRemedies(setup, scales),
  };
};

/** numerics.md §5: |f|max dt; binds on coarse grids that reach far from the equator. */
export const stepAgainstRotation: Rule = ({ setup, scales }) => {
  const { F } = stepNumbers(scales.rates, scales.dt);
  if (scales.rates.coriolis === 0) return null;
  const ratio = ratioOfMaximum(F, STEP_LIMITS.coriolisCaution);
  const refused = F > STEP_LIMITS.coriolis;
  const highest = readable((refused ? STEP_LIMITS.coriolis : STEP_LIMITS.coriolisCaution) / scales.rates.coriolis, 4);
  const found = `|f| dt is ${readable(F)}${scales.beta > 0 ? ' at the poleward edge' : ''}`;
  return {
    id: 'step-rotation',
    label: 'Step against rotation',
    verdict: verdictOf(ratio, refused),
    value: F,
    limit: STEP_LIMITS.coriolisCaution,
    unit: '',
    ratio,
    reason: refused
      ? `${found}; the step must be below ${highest} s (${STEP_LIMITS.coriolis}).`
      : ratio > 1
        ? `${found}; inertial motion is damped and late there, best below ${highest} s (${STEP_LIMITS.coriolisCaution}).`
        : `${found}, within ${STEP_LIMITS.coriolisCaution}.`,
    pointers: ['/numerics/stepsPerDay', '/basin/southDeg', '/basin/northDeg'],
    cures: () => stepRemedies(setup, scales),
  };
};

/** numerics.md §5: A dt (1/dx² + 1/dy²). */
export const stepAgainstViscosity: Rule = ({ setup, scales }) => {
  if (scales.rates.viscous === 0) return null;
  const { nuS } = stepNumbers(scales.rates, scales.dt);
  const ratio = ratioOfMaximum(nuS, STEP_LIMITS.viscous);
  const found = `A dt (1/dx² + 1/dy²) is ${readable(nuS)}`;
  return {
    id: 'step-viscosity',
    label: 'Step against viscosity',
    verdict: verdictOf(ratio, ratio > 1),
    value: nuS,
    limit: STEP_LIMITS.viscous,
    unit: '',
    ratio,
    reason:
      ratio > 1
        ? `${found}; it must not exceed ${STEP_LIMITS.viscous}: at most ${readable(STEP_LIMITS.viscous / scales.rates.viscous, 4)} s at this viscosity.`
        : `${found}, within ${STEP_LIMITS.viscous}.`,
    pointers: [...STEP_POINTERS, '/friction/viscosityM2S'],
    cures: () => stepRemedies(setup, scales),
  };
};

/** numerics.md §5: (S/S0)² + νS/0.16, shown where there is viscosity. */
export const stepAgainstBoth: Rule = ({ setup, scales }) => {
  if (scales.rates.viscous === 0) return null;
  const { combined } = stepNumbers(scales.rates, scales.dt);
  const ratio = ratioOfMaximum(combined, 1);
  return {
    id: 'step-combined',
    label: 'Step against waves and viscosity',
    verdict: verdictOf(ratio, ratio > 1),
    value: combined,
    limit: 1,
    unit: '',
    ratio,
    reason:
      ratio > 1
        ? `Gravity waves and viscosity together come to ${readable(combined)}; together they must not exceed 1.`
        : `Gravity waves and viscosity together come to ${readable(combined)} of 1.`,
    pointers: [...STEP_POINTERS, '/friction/viscosityM2S'],
    cures: () => stepRemedies(setup, scales),
  };
};

/** numerics.md §5, nonlinear: S(1 + 2Fr) with Fr expected before the run. While it runs the true speeds are watched. */
export const stepAgainstFlow: Rule = ({ setup, scales }) => {
  if (setup.numerics.equations !== 'nonlinear') return null;
  const { froude } = scales.rates;
  const { flow } = stepNumbers(scales.rates, scales.dt);
  const { flow: highest, flowCaution, froudeCaution } = STEP_LIMITS;
  const byStep = ratioOfMaximum(flow, flowCaution);
  const bySpeed = ratioOfMaximum(froude, froudeCaution);
  const refused = flow > highest;
  const ratio = Math.max(byStep, bySpeed);
  const found = `S(1 + 2Fr) is ${readable(flow)} with currents up to ${readable(froude)} of the wave speed expected`;
  return {
    id: 'step-flow',
    label: 'Step against the flow',
    verdict: verdictOf(ratio, refused),
    value: flow,
    limit: flowCaution,
    unit: '',
    ratio,
    reason: refused
      ? `${found}; the flow makes waves blow up beyond ${highest}.`
      : byStep > 1
        ? `${found}; it is close to ${highest}, where waves on the flow blow up, best within ${flowCaution}.`
        : bySpeed > 1
          ? `Currents up to ${readable(froude)} of the wave speed are expected: past ${froudeCaution} the step is not proven for them.`
          : `${found}, within ${flowCaution}.`,
    pointers: [...STEP_POINTERS, '/wind/components', '/layer/restThicknessM'],
    cures: () => stepRemedies(setup, scales),
  };
};
