import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import type { Grid } from '../grid/grid';
import type { Column } from '../integration-types';
import type { Section, Setup } from '../setup';
import type { Model } from '../stepper/model';
import { valueAt } from '../stepper/fields';
import { NONE } from '../stepper/statics';
import type { StepSums } from '../stepper/sums';
import { meridionalThickness, volumeNorthOf, zonalThickness } from './energy';
import { volumeRates } from './step-budget';

/** Of one section: transport, damping, entrainment. */
const SLOTS = 3 * SUM_SLOTS;
const M3S_PER_SV = 1e6;
const W_PER_PW = 1e15;
const M3_PER_KM3 = 1e9;

/** A section on the grid: a row of v points (latitude) or a column of u points (longitude). */
export interface SnappedSection {
  section: Section;
  /** v row or u column. */
  index: number;
  /** Where that line lies, degrees. */
  atDeg: number;
}

/** Snaps a section to its nearest line. Throws RangeError when it lies outside the basin by more than half a cell. */
export function snapSection(grid: Grid, section: Section): SnappedSection {
  const lines = section.along === 'latitude' ? grid.latFace : grid.lonFace;
  const spacing = lines[1] - lines[0];
  const index = Math.round((section.atDeg - lines[0]) / spacing);
  if (!(index >= 0 && index < lines.length))
    throw new RangeError(
      `The section “${section.name}” at ${section.atDeg}° lies outside the basin, which reaches from ${lines[0]}° to ${lines[lines.length - 1]}°.`,
    );
  return { section, index, atDeg: lines[index] };
}

/**
 * Transports through the sections of a setup, added up every step from the very fluxes that change η (ut H dy and
 * vt H dx; in nonlinear mode the limited ones), so that V_net = d(volume north)/dt − what damping, sponges and entrainment
 * added there closes to round-off (numerics.md §9).
 */
export class SectionRecorder {
  /** Everything that a checkpoint keeps: for each section the sums of transport, damping and entrainment, then the step count. */
  readonly slots: Float64Array;
  readonly columns: Column[];
  readonly #model: Model;
  readonly #heatPerVolume: number;
  readonly #snapped: SnappedSection[];
  readonly #damped: boolean;
  readonly #entrained: boolean;

  constructor(model: Model, setup: Pick<Setup, 'output' | 'layer' | 'constants'>) {
    this.#model = model;
    this.#damped = model.damping > 0 || model.statics.spongeCell !== NONE;
    this.#entrained = model.entrainment !== null;
    this.#heatPerVolume = setup.constants.heatCapacityJM3K * setup.layer.temperatureStepK;
    this.#snapped = setup.output.sections.map((section) => snapSection(model.grid, section));
    this.slots = new Float64Array(SLOTS * this.#snapped.length + 1);
    this.columns = this.#snapped.flatMap((snapped, k) => sectionColumns(snapped, k, this.#damped, this.#entrained));
  }

  /** Adds the fluxes of one step. */
  add(sums: StepSums): void {
    const model = this.#model;
    const { dxV, dy, ny } = model.grid;
    let meridian = 0;
    this.#snapped.forEach(({ section, index }, k) => {
      const latitude = section.along === 'latitude';
      let flux = 0;
      if (latitude) flux = sums.northward[index] * dxV[index];
      else {
        const column = sums.eastward[meridian++];
        for (let j = 0; j < ny; j++) flux += column[j];
        flux *= dy;
      }
      addTo(this.slots, SLOTS * k, model.equations === 'linear' ? flux * model.restThickness : flux);
      if (!latitude || !(this.#damped || this.#entrained)) return;
      let [damped, entrained] = [0, 0];
      for (let j = index; j < ny; j++) {
        const rates = volumeRates(model, sums, j);
        damped += rates.damped;
        entrained += rates.entrained;
      }
      addTo(this.slots, SLOTS * k + SUM_SLOTS, damped);
      addTo(this.slots, SLOTS * k + 2 * SUM_SLOTS, entrained);
    });
    this.slots[this.slots.length - 1] += 1;
  }

  /** Values in the order of `columns`; begins the next interval. NaN means when no step was made. */
  take(): Float64Array {
    const steps = this.slots[this.slots.length - 1];
    const values: number[] = [];
    this.#snapped.forEach(({ section, index }, k) => {
      const mean = sumAt(this.slots, SLOTS * k) / steps;
      const latitude = section.along === 'latitude';
      const now = latitude ? this.#northward(index) : this.#eastward(index);
      values.push(mean / M3S_PER_SV, now / M3S_PER_SV, (mean * this.#heatPerVolume) / W_PER_PW);
      if (!latitude) return;
      values.push(volumeNorthOf(this.#model, index) / M3_PER_KM3);
      if (this.#damped) values.push(sumAt(this.slots, SLOTS * k + SUM_SLOTS) / steps / M3S_PER_SV);
      if (this.#entrained) values.push(sumAt(this.slots, SLOTS * k + 2 * SUM_SLOTS) / steps / M3S_PER_SV);
    });
    this.slots.fill(0);
    return Float64Array.from(values);
  }

  /** Σ v h_v dx over a v row now, m³/s. */
  #northward(row: number): number {
    const model = this.#model;
    const thickness = meridionalThickness(model);
    let sum = 0;
    for (let i = 0; i < model.grid.nx; i++) {
      const v = valueAt(model, 'v', i, row);
      if (v !== 0) sum += v * thickness(i, row);
    }
    return sum * model.grid.dxV[row];
  }

  /** Σ u h_u dy over a u column now, m³/s. */
  #eastward(column: number): number {
    const model = this.#model;
    const thickness = zonalThickness(model);
    let sum = 0;
    for (let j = 0; j < model.grid.ny; j++) {
      const u = valueAt(model, 'u', column, j);
      if (u !== 0) sum += u * thickness(column, j);
    }
    return sum * model.grid.dy;
  }
}

/** The u columns of a setup's longitude sections, in their order. */
export function meridiansOf(grid: Grid, sections: readonly Section[]): number[] {
  return sections.filter(({ along }) => along === 'longitude').map((section) => snapSection(grid, section).index);
}

/** Columns of section k, named `<k>.transport` and so on. */
function sectionColumns({ section }: SnappedSection, k: number, damped: boolean, entrained: boolean): Column[] {
  const towards = section.along === 'latitude' ? 'northward' : 'eastward';
  const columns: Column[] = [
    { name: `${k}.transport`, label: `${section.name}: ${towards} volume transport`, unit: 'Sv', kind: 'mean' },
    {
      name: `${k}.transportNow`,
      label: `${section.name}: ${towards} volume transport at the end of the interval`,
      unit: 'Sv',
      kind: 'instant',
    },
    { name: `${k}.heat`, label: `${section.name}: ${towards} heat transport`, unit: 'PW', kind: 'mean' },
  ];
  if (section.along === 'longitude') return columns;
  columns.push({
    name: `${k}.volumeNorth`,
    label: `${section.name}: volume anomaly north of it`,
    unit: 'km³',
    kind: 'instant',
  });
  if (damped)
    columns.push({
      name: `${k}.dampingNorth`,
      label: `${section.name}: volume added by damping north of it`,
      unit: 'Sv',
      kind: 'mean',
    });
  if (entrained)
    columns.push({
      name: `${k}.entrainedNorth`,
      label: `${section.name}: volume added by entrainment north of it`,
      unit: 'Sv',
      kind: 'mean',
    });
  return columns;
}
