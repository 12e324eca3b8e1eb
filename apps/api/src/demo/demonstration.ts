import { corvaneSetup } from '@halfdeep/ocean';
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
  'affine in the strength of the season, so strong − control must equal control − weak to round-off. What departs from ' +
  'that later is nonlinear.\n\nThe basin, the wind and the Harrow Point Ocean Group are invented.';
const RUNS = [
  { label: 'Control', strength: 1 },
  { label: 'Strong wind, +20 %', strength: 1.2 },
  { label: 'Weak wind, −20 %', strength: 0.8 },
] as const;

/**
 * The demonstration scenario: one experiment of the demonstration's modeller with a linear control, a strong and a weak
 * run, queued like anybody's. Made once; a start that was cut short is completed by the next one, and what somebody
 * deleted later stays deleted. The queue must have been started.
 */
export async function queueDemonstration(parts: DemonstrationParts, modellerEmail: string): Promise<void> {
  const before = await DeskSetting.read(SETTING);
  const state = before === undefined ? await begin(parts, modellerEmail) : kept.parse(before);
  if (state.complete) return;
  const experiment = await parts.experiments.find(state.experimentId);
  let control: Run | null = null;
  for (const { label, strength } of RUNS) {
    const there: Run | null = await Run.findOne({ where: { experimentId: experiment.id, label } });
    const setup = corvaneSetup(strength);
    const run: Run = there ?? (await parts.runs.create(experiment, { label, setup, parentRunId: control?.id }));
    control ??= run;
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
