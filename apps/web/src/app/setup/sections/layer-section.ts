import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { ChoiceField, type Choice } from '../../shared/choice-field/choice-field';
import { newEntrainment } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';

/** The warm layer at rest, and what keeps a nonlinear one from vanishing. */
@Component({
  selector: 'app-layer-section',
  imports: [ChoiceField, SectionFrame, SetupChoice, SetupQuantity],
  template: `
    <app-section-frame section="layer" heading="Layer">
      <div class="abreast">
        <app-setup-quantity at="/layer/restThicknessM" of="restThickness" symbol="H" />
        <app-setup-quantity at="/layer/reducedGravityMS2" of="reducedGravity" symbol="g′" />
        <app-setup-quantity at="/layer/dampingPerS" of="damping" symbol="κ" />
        <app-setup-quantity at="/layer/temperatureStepK" of="temperatureStep" />
        @if (nonlinear()) {
          <app-setup-quantity at="/layer/minimumThicknessM" of="minimumThickness" symbol="h min" />
          <app-choice-field
            label="Entrainment"
            [choices]="switches"
            why="Water from below fills up a layer that gets thin; it adds mass."
            [value]="entrainment() ? 'on' : 'off'"
            (valueChange)="entrain($event)"
          />
          @if (entrainment()) {
            <app-setup-quantity at="/layer/entrainment/onsetThicknessM" of="entrainmentOnset" symbol="Hₑ" />
            <app-setup-quantity at="/layer/entrainment/timescaleDays" of="entrainmentTime" symbol="tₑ" />
            <app-setup-choice
              at="/layer/entrainment/detrainment"
              label="Given back"
              [choices]="detrainments"
              why="Evenly: what comes in goes out over the whole basin, and the total stays."
            />
          }
        }
      </div>
      @if (!nonlinear()) {
        <p class="note">
          A minimum thickness and entrainment belong to the nonlinear equations; choose those under Numerics.
        </p>
      }
    </app-section-frame>
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LayerSection {
  private readonly draft = inject(SetupDraft);
  protected readonly switches: Choice[] = [
    { value: 'off', label: 'none' },
    { value: 'on', label: 'where thin' },
  ];
  protected readonly detrainments: Choice[] = [
    { value: 'none', label: 'nothing' },
    { value: 'uniform', label: 'evenly over the basin' },
  ];
  protected readonly nonlinear = computed(() => this.draft.value().numerics.equations === 'nonlinear');
  protected readonly entrainment = computed(() => this.draft.value().layer.entrainment);

  protected entrain(choice: string): void {
    this.draft.set('/layer/entrainment', choice === 'on' ? newEntrainment(this.draft.readable().layer) : null);
  }
}
