import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { writeDecimal } from '../../shared/quantity-field/decimal-text';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';

/** The grid and the step. */
@Component({
  selector: 'app-numerics-section',
  imports: [MatButton, SectionFrame, SetupQuantity],
  template: `
    <app-section-frame section="numerics" heading="Numerics" remark="linear equations on a C-grid">
      <div class="abreast">
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
}
