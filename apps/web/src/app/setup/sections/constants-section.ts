import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { DEFAULT_CONSTANTS } from '@halfdeep/ocean';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupDraft } from '../setup-draft';
import { sameValue } from '../setup-pointer';
import { SectionFrame } from './section-frame';

/** The constants that go into every setup; folded, since they are hardly ever changed. */
@Component({
  selector: 'app-constants-section',
  imports: [SectionFrame, SetupQuantity],
  template: `
    <app-section-frame section="constants" heading="Constants">
      <details [open]="open()">
        <summary>
          {{ usual() ? 'The usual constants, written into the setup' : 'Not the usual constants' }}
        </summary>
        <div class="abreast">
          <app-setup-quantity at="/constants/earthRadiusM" of="earthRadius" symbol="a" />
          <app-setup-quantity at="/constants/rotationRatePerS" of="rotationRate" symbol="Ω" />
          <app-setup-quantity at="/constants/gravityMS2" of="gravity" symbol="g" />
          <app-setup-quantity at="/constants/densityKgM3" of="density" symbol="ρ₀" />
          <app-setup-quantity at="/constants/heatCapacityJM3K" of="heatCapacity" />
        </div>
      </details>
    </app-section-frame>
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ConstantsSection {
  private readonly draft = inject(SetupDraft);
  protected readonly usual = computed(() => sameValue(this.draft.value().constants, DEFAULT_CONSTANTS));
  /** What is wrong must be seen. */
  protected readonly open = computed(
    () => !this.usual() || [...this.draft.problems().keys()].some((pointer) => pointer.startsWith('/constants')),
  );
}
