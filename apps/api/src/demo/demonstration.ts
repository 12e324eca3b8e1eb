import { corvaneFamilySetup, corvaneSetup, type Setup } from '@halfdeep/ocean';
import { DeskSetting, Experiment, Person, Run, type DeskDatabase } from '@halfdeep/store';
import * as z from 'zod';
import { type ExperimentService } from '../experiments/experiment-service';
import { type RunService } from '../runs/run-service';

export interface DemonstrationParts {
  desk: DeskDatabase;
  experiments: ExperimentService;
  runs: RunService;
}

const SETTING = 'demonstration experiment';
const kept = z.object({ experimentId: z.uuid(), complete: z.boolean() });

const QUESTION = 'Does a stronger Halcyon wind carry proportionally more heat out of the summer hemisphere?';
const NOTES =
  'The Halcyon wind blows across the equator of the Corvane Basin from the winter into the summer hemisphere, and so ' +
  'drives the layer’s interior from the summer into the winter hemisphere. The linear runs are the baseline: they are ' +
  'affine in the strength of the season, so strong − control must equal control − weak to round-off. Their nonlinear ' +
  'counterparts, and a nonlinear family along the seasonal strength on cells of half a degree, carry the answer: what ' +
  'departs from the straight line there is nonlinear.\n\nThe basin, the wind and the Harrow Point Ocean Group are invented.';

interface PlannedRun {
  label: string;
  setup: () => Setup;
  /** Label of the run that it descends from; null for the control. */
  from: string | null;
}

const CONTROL = 'Control';
const NONLINEAR = 'Nonlinear control';
const FAMILY = 'Family, season × 1.0';
const member = (strength: number): PlannedRun => ({
  label: `Family, season × ${strength.toFixed(1)}`,
  setup: () => corvaneFamilySetup(strength),
  from: strength === 1 ? NONLINEAR : FAMILY,
});

/** In the order of the queue: what others descend from comes first. */
const RUNS: readonly PlannedRun[] = [
  { label: CONTROL, setup: () => corvaneSetup(1), from: null },
  { label: 'Strong wind, +20 %', setup: () => corvaneSetup(1.2), from: CONTROL },
  { label: 'Weak wind, −20 %', setup: () => corvaneSetup(0.8), from: CONTROL },
  { label: NONLINEAR, setup: () => corvaneSetup(1, 'nonlinear'), from: CONTROL },
  { label: 'Nonlinear, strong wind, +20 %', setup: () => corvaneSetup(1.2, 'nonlinear'), from: NONLINEAR },
  { label: 'Nonlinear, weak wind, −20 %', setup: () => corvaneSetup(0.8, 'nonlinear'), from: NONLINEAR },
  ...[1, 0.6, 0.8, 1.2, 1.4].map(member),
];

/**
 * The demonstration scenario: one experiment of the demonstration's modeller with a linear control, a strong and a weak
 * run, their nonlinear counterparts, and a nonlinear family of five along the seasonal strength, queued like anybody's. Made once; a start that was cut short is completed by the next one, and what somebody
 * deleted later stays deleted. The queue must have been started.
 */
export async function queueDemonstration(parts: DemonstrationParts, modellerEmail: string): Promise<void> {
  const before = await DeskSetting.read(SETTING);
  const state = before === undefined ? await begin(parts, modellerEmail) : kept.parse(before);
  if (state.complete) return;
  const experiment = await parts.experiments.find(state.experimentId);
  for (const { label, setup, from } of RUNS) {
    const labelled = (wanted: string): Promise<Run | null> =>
      Run.findOne({ where: { experimentId: experiment.id, label: wanted } });
    if (await labelled(label)) continue;
    const parent = from === null ? null : await labelled(from);
    await parts.runs.create(experiment, { label, setup: setup(), parentRunId: parent?.id });
  }
  await parts.desk.write((transaction) => DeskSetting.keep(SETTING, { ...state, complete: true }, transaction));
}

async function begin({ desk }: DemonstrationParts, modellerEmail: string): Promise<z.infer<typeof kept>> {
  const owner = await Person.findOne({ where: { email: modellerEmail } });
  if (!owner) throw new Error(`The demonstration needs the account ${modellerEmail}, which is not there.`);
  const state = { experimentId: crypto.randomUUID(), complete: false };
  const now = new Date();
  await desk.write(async (transaction) => {
    await Experiment.create(
      {
        id: state.experimentId,
        ownerId: owner.id,
        question: QUESTION,
        notes: NOTES,
        createdAt: now,
        movedAt: now,
        moved: 'Question asked',
      },
      { transaction },
    );
    await DeskSetting.keep(SETTING, state, transaction);
  });
  return state;
}
