import { ChangeDetectionStrategy, Component } from '@angular/core';
import { SetupQuantity } from '../fields/setup-quantity';
import { SectionFrame } from './section-frame';

/** The warm layer at rest. */
@Component({
  selector: 'app-layer-section',
  imports: [SectionFrame, SetupQuantity],
  template: `
    <app-section-frame section="layer" heading="Layer">
      <div class="abreast">
        <app-setup-quantity at="/layer/restThicknessM" of="restThickness" symbol="H" />
        <app-setup-quantity at="/layer/reducedGravityMS2" of="reducedGravity" symbol="g′" />
        <app-setup-quantity at="/layer/dampingPerS" of="damping" symbol="κ" />
        <app-setup-quantity at="/layer/temperatureStepK" of="temperatureStep" />
      </div>
    </app-section-frame>
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class LayerSection {}
