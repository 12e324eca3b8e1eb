import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { writeDecimal } from '../../shared/quantity-field/decimal-text';
import type { Choice } from '../../shared/choice-field/choice-field';
import { defaultMinimumThickness } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';

/** The grid and the step. */
@Component({
  selector: 'app-numerics-section',
  imports: [MatButton, SectionFrame, SetupChoice, SetupQuantity],
  template: `
    <app-section-frame section="numerics" heading="Numerics" [remark]="remark()">
      <div class="abreast">
        <app-setup-choice
          at="/numerics/equations"
          label="Equations"
          [choices]="equations"
          [asks]="true"
          why="Nonlinear: currents carry momentum and thickness; steps are shorter and dearer."
          (chosen)="choose($event)"
        />
        <app-setup-quantity at="/numerics/spacingLongitudeDeg" of="spacing" label="Grid spacing in longitude" />
        <app-setup-quantity
          at="/numerics/spacingLatitudeDeg"
          of="spacing"
          label="Grid spacing in latitude"
          [why]="cells()"
        />
        <app-setup-quantity at="/numerics/stepsPerDay" of="stepsPerDay" [why]="step()" />
      </div>
      @if (proposed(); as steps) {
        <p class="note actions">
          The limits of this grid propose {{ steps }} steps a day.
          <button mat-stroked-button class="small" type="button" (click)="draft.set('/numerics/stepsPerDay', steps)">
            Use {{ steps }} a day
          </button>
        </p>
      }
      @for (note of notes(); track note) {
        <p class="note">{{ note }}</p>
      }
    </app-section-frame>
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class NumericsSection {
  protected readonly draft = inject(SetupDraft);
  protected readonly equations: Choice[] = [
    { value: 'linear', label: 'linear' },
    { value: 'nonlinear', label: 'nonlinear' },
  ];
  protected readonly remark = computed(() => `${this.draft.value().numerics.equations} equations on a C-grid`);
  protected readonly notes = computed(() => this.draft.preflight()?.notes ?? []);
  protected readonly cells = computed(() => {
    const grid = this.draft.preflight()?.grid;
    return grid ? `${writeDecimal(grid.nx)} × ${writeDecimal(grid.ny)} cells.` : 'Sets what can be resolved.';
  });
  protected readonly step = computed(() => {
    const steps = this.draft.at('/numerics/stepsPerDay');
    const rule = 'A multiple of 4, so that six hours are whole steps.';
    return typeof steps === 'number' && steps > 0
      ? `Step ${writeDecimal(Math.round(86_400 / steps))} s. ${rule}`
      : rule;
  });
  /** The proposal, when another number stands in the field and no remedy speaks of it. */
  protected readonly proposed = computed(() => {
    if (this.draft.check('/numerics/stepsPerDay')) return null;
    const proposed = this.draft.preflight()?.proposedStepsPerDay;
    return proposed !== undefined && proposed !== this.draft.at('/numerics/stepsPerDay') ? proposed : null;
  });

  /** Fields that only the nonlinear equations use come into view with values that fit the layer. */
  protected choose(equations: string): void {
    this.draft.set('/numerics/equations', equations);
    const { restThicknessM, minimumThicknessM } = this.draft.readable().layer;
    if (equations !== 'nonlinear') return;
    if (minimumThicknessM > restThicknessM / 2)
      this.draft.set('/layer/minimumThicknessM', defaultMinimumThickness(restThicknessM));
    if (this.draft.readable().wind.stressFloorM > restThicknessM) this.draft.set('/wind/stressFloorM', 0);
  }
}
