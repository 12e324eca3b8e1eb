import { ChangeDetectionStrategy, Component } from '@angular/core';
import type { Choice } from '../../shared/choice-field/choice-field';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SectionFrame } from './section-frame';

/** What slows the water, in the open and at the wall. */
@Component({
  selector: 'app-friction-section',
  imports: [SectionFrame, SetupChoice, SetupQuantity],
  template: `
    <app-section-frame section="friction" heading="Friction">
      <div class="abreast">
        <app-setup-quantity at="/friction/rayleighPerS" of="rayleigh" symbol="r" />
        <app-setup-quantity at="/friction/viscosityM2S" of="viscosity" symbol="A" />
        <app-setup-choice
          at="/friction/slip"
          label="At the coast"
          [choices]="slips"
          why="No slip: water at the wall stands still."
        />
      </div>
    </app-section-frame>
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FrictionSection {
  protected readonly slips: Choice[] = [
    { value: 'free', label: 'free slip' },
    { value: 'none', label: 'no slip' },
  ];
}
