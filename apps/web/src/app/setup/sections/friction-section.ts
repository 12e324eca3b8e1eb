import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { LIMITS, type Setup } from '@halfdeep/ocean';
import type { Choice } from '../../shared/choice-field/choice-field';
import { newViscosityPatch } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupText } from '../fields/setup-text';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';

/** What slows the water, in the open, at the wall, and in places of its own. */
@Component({
  selector: 'app-friction-section',
  imports: [MatButton, SectionFrame, SetupChoice, SetupQuantity, SetupText],
  templateUrl: './friction-section.html',
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class FrictionSection {
  protected readonly draft = inject(SetupDraft);
  protected readonly slips: Choice[] = [
    { value: 'free', label: 'free slip' },
    { value: 'none', label: 'no slip' },
  ];
  protected readonly patches = computed(() => this.draft.value().friction.viscosityPatches);
  protected readonly full = computed(() => this.patches().length >= LIMITS.viscosityPatches.max);
  protected readonly problem = computed(() => this.draft.problems().get('/friction/viscosityPatches') ?? null);

  protected add(): void {
    const readable = this.draft.readable();
    const basis: Setup = { ...readable, friction: { ...readable.friction, viscosityPatches: this.patches() } };
    this.draft.insert('/friction/viscosityPatches', newViscosityPatch(basis));
  }
}
