import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { LIMITS, type Setup } from '@halfdeep/ocean';
import { formatCount, sentenceStart } from '../../core/format';
import type { Choice } from '../../shared/choice-field/choice-field';
import { newMooring, newSection } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupText } from '../fields/setup-text';
import { SetupDraft } from '../setup-draft';
import { SectionFrame } from './section-frame';

/** How long the run is, and what is kept of it. */
@Component({
  selector: 'app-output-section',
  imports: [MatButton, SectionFrame, SetupChoice, SetupQuantity, SetupText],
  templateUrl: './output-section.html',
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class OutputSection {
  protected readonly draft = inject(SetupDraft);
  protected readonly output = computed(() => this.draft.value().output);
  protected readonly along: Choice[] = [
    { value: 'latitude', label: 'a latitude' },
    { value: 'longitude', label: 'a longitude' },
  ];
  protected readonly budgets: Choice[] = [
    { value: 'false', label: 'not kept' },
    { value: 'true', label: 'kept' },
  ];
  protected readonly limits = LIMITS;
  protected readonly years = computed(() => {
    const days = this.draft.at('/length/days');
    if (typeof days !== 'number' || !Number.isFinite(days)) return LIMITS.lengthDays.why;
    const years = days / 365;
    const text = Number.isInteger(years) ? String(years) : years.toFixed(2);
    return `${text} ${years === 1 ? 'year' : 'years'} of 365 days. Long enough for the season to repeat?`;
  });

  protected readonly outside = computed(() => {
    const places = new Set(this.draft.outside().map(({ list, index }) => `${list} ${index}`));
    return places.size === 0 ? '' : `${sentenceStart(formatCount(places.size, 'place'))} outside the basin.`;
  });

  protected listProblem(list: 'sections' | 'moorings'): string | null {
    return this.draft.problems().get(`/output/${list}`) ?? null;
  }

  protected isNew(list: 'sections' | 'moorings', index: number): boolean {
    return this.draft.change(`/output/${list}/${index}`) !== null;
  }

  /** A basin that can be read, and the lists as they are written. */
  private basis(): Setup {
    return { ...this.draft.readable(), output: this.draft.value().output };
  }

  protected addSection(): void {
    this.draft.insert('/output/sections', newSection(this.basis()));
  }

  protected addMooring(): void {
    this.draft.insert('/output/moorings', newMooring(this.basis()));
  }
}
