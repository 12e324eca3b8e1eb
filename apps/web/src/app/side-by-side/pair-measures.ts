import { type ResourceRef, ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type Run, type SideBySide } from '@halfdeep/contracts';
import { formatModelDay, formatNumber, formatQuantity } from '../core/format';
import { toApiProblem } from '../core/problem';
import { DataState } from '../shared/data-state/data-state';
import { VARIABLE_VIEWS, isVariable } from '../shared/plate/variables';
import { type MapMeasures } from './pair-math';

const SIGNIFICANT = 3;

/** How far apart two runs are: over the whole run (computed by the server) and on the day of the maps (computed here). */
@Component({
  selector: 'app-pair-measures',
  imports: [DataState],
  template: `
    @if (today(); as today) {
      <div class="scroll">
        <table class="numbers">
          <caption class="visually-hidden">
            How far apart the maps of this day are
          </caption>
          <thead>
            <tr>
              <th scope="col">map, {{ dayOf(today.day) }}</th>
              <th scope="col">A</th>
              <th scope="col">B</th>
              <th scope="col">B / A</th>
            </tr>
          </thead>
          <tbody>
            <tr>
              <td>RMS of {{ nameOf(today.variable) }}</td>
              <td>{{ shown(today.measures.rmsA, today.variable) }}</td>
              <td>{{ shown(today.measures.rmsB, today.variable) }}</td>
              <td class="strong">{{ number(today.measures.rmsB / today.measures.rmsA) }}</td>
            </tr>
            <tr>
              <td>RMS difference</td>
              <td colspan="3">{{ shown(today.measures.rmsDifference, today.variable) }}</td>
            </tr>
            <tr>
              <td>pattern correlation</td>
              <td colspan="3">{{ number(today.measures.correlation) }}</td>
            </tr>
          </tbody>
        </table>
      </div>
    }
    @if (answer().error()) {
      <app-data-state state="error" [problem]="problem()" (again)="answer().reload()" />
    } @else if (answer().hasValue()) {
      @if (answer().value()?.reason; as reason) {
        <p class="small quiet">{{ reason }}</p>
      } @else {
        <div class="scroll" tabindex="0" role="region" aria-label="Measures over the whole run">
          <table class="numbers">
            <thead>
              <tr>
                <th scope="col">whole run</th>
                <th scope="col">RMS, A</th>
                <th scope="col">B</th>
                <th scope="col">RMS difference</th>
                <th scope="col">correlation</th>
              </tr>
            </thead>
            <tbody>
              @for (measure of answer().value()?.measures ?? []; track measure.variable) {
                <tr>
                  <td>
                    {{ nameOf(measure.variable) }} <span class="u">{{ unitOf(measure.variable) }}</span>
                  </td>
                  <td>{{ bare(measure.rmsA, measure.variable) }}</td>
                  <td>{{ bare(measure.rmsB, measure.variable) }}</td>
                  <td>{{ bare(measure.rmsDifference, measure.variable) }}</td>
                  <td class="strong">{{ number(measure.correlation) }}</td>
                </tr>
              }
            </tbody>
          </table>
        </div>
        <p class="note quiet">
          {{ common() }}; over all cells that are water in both, weighted by area; {{ answer().value()?.regridding }}.
        </p>
      }
    } @else {
      <app-data-state state="loading" [heading]="working()" />
    }
  `,
  styles: `
    :host {
      display: grid;
      gap: 20px;
      align-content: start;
      min-width: 0;
    }
    /* Words wrap, so that all five columns stand in the column of the page. */
    th,
    td:first-child {
      white-space: normal;
    }
    .strong {
      font-weight: 600;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PairMeasures {
  readonly a = input.required<Run>();
  readonly b = input.required<Run>();
  readonly today = input.required<{ day: number; variable: string; measures: MapMeasures } | null>();
  readonly answer = input.required<ResourceRef<SideBySide | undefined>>();

  /** Every map of both runs is read and measured on the server: that takes seconds, and ends when one leaves. */
  protected readonly working = computed(
    () => `and measuring up to ${formatNumber(Math.min(framesOf(this.a()), framesOf(this.b())))} maps of each`,
  );
  protected readonly problem = computed(() => (this.answer().error() ? toApiProblem(this.answer().error()) : null));
  protected readonly common = computed(() => {
    const days = this.answer().value()?.commonDays;
    return days
      ? `Days ${formatNumber(days.from)} to ${formatNumber(days.to)}, ${formatNumber(days.records)} maps`
      : '';
  });

  protected dayOf(day: number): string {
    return formatModelDay(day);
  }
  protected nameOf(variable: string): string {
    return isVariable(variable) ? VARIABLE_VIEWS[variable].label : variable;
  }
  protected shown(value: number | null, variable: string): string {
    const { factor, unit } = isVariable(variable) ? VARIABLE_VIEWS[variable] : { factor: 1, unit: '' };
    return formatQuantity((value ?? NaN) * factor, unit, { significant: SIGNIFICANT });
  }
  protected unitOf(variable: string): string {
    return isVariable(variable) ? VARIABLE_VIEWS[variable].unit : '';
  }
  /** The number alone: its unit stands beside the name, so that four columns fit. */
  protected bare(value: number | null, variable: string): string {
    const factor = isVariable(variable) ? VARIABLE_VIEWS[variable].factor : 1;
    return formatNumber((value ?? NaN) * factor, { significant: SIGNIFICANT });
  }
  protected number(value: number | null): string {
    return formatNumber(value ?? NaN, { significant: 4 });
  }
}

const framesOf = (run: Run) => run.progress.records.frames;
