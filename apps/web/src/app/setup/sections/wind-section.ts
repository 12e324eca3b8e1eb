import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { LIMITS } from '@halfdeep/ocean';
import { WindDiagramPlate } from '../../shared/wind-diagram/wind-diagram';
import { freshName, newWindComponent } from '../blank-setup';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';
import { WindComponentFields } from './wind-component-fields';

/** The force on the layer: components that add up, each a pattern in space times a season in time. */
@Component({
  selector: 'app-wind-section',
  imports: [MatButton, SectionFrame, SetupQuantity, WindComponentFields, WindDiagramPlate],
  template: `
    <app-section-frame section="wind" heading="Wind" [remark]="remark()">
      <div class="duo">
        <div class="fields">
          <app-setup-quantity at="/wind/seasonalStrength" of="seasonalStrength" symbol="s" />
          @if (nonlinear()) {
            <app-setup-quantity at="/wind/stressFloorM" of="stressFloor" symbol="hₛ" />
          }
          <p class="actions">
            <button mat-stroked-button type="button" [disabled]="full()" (click)="add()">Add a component</button>
          </p>
          @if (problem(); as reason) {
            <p class="note refused" role="alert">{{ reason }}</p>
          }
        </div>
        <app-wind-diagram class="picture" [setup]="draft.readable()" />
      </div>
      <ol class="list">
        @for (component of components(); track $index) {
          <li class="item">
            <app-wind-component-fields [index]="$index" [component]="component" (duplicated)="duplicate($index)" />
          </li>
        } @empty {
          <li class="item"><p class="note">No wind blows. The layer moves only if it starts disturbed.</p></li>
        }
      </ol>
    </app-section-frame>
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WindSection {
  protected readonly draft = inject(SetupDraft);
  protected readonly components = computed(() => this.draft.value().wind.components);
  protected readonly nonlinear = computed(() => this.draft.value().numerics.equations === 'nonlinear');
  protected readonly full = computed(() => this.components().length >= LIMITS.windComponents.max);
  protected readonly problem = computed(() => this.draft.problems().get('/wind/components') ?? null);
  protected readonly remark = computed(() => {
    const count = this.components().length;
    return count === 0 ? 'none' : count === 1 ? 'one component' : `${count} components, added up`;
  });

  protected add(): void {
    this.draft.insert('/wind/components', newWindComponent(this.draft.value()));
  }

  protected duplicate(index: number): void {
    const component = this.components()[index];
    if (!component) return;
    const stem = component.name.replace(/ \d+$/, '') || 'Wind';
    const copy = { ...structuredClone(component), name: freshName(stem, this.components()) };
    this.draft.insert('/wind/components', copy, index + 1);
  }
}
