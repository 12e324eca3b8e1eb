import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, output } from '@angular/core';
import { MatButton } from '@angular/material/button';
import type { Season, WindComponent, WindPattern } from '@halfdeep/ocean';
import { ChoiceField, type Choice } from '../../shared/choice-field/choice-field';
import { newPattern } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupText } from '../fields/setup-text';
import { SetupDraft } from '../setup-draft';
import { asKind, fitsKind, kindOf, type SeasonKind } from './season-kind';

/** One component of the wind: its pattern in space and its season in time. */
@Component({
  selector: 'app-wind-component-fields',
  imports: [ChoiceField, MatButton, SetupChoice, SetupQuantity, SetupText],
  templateUrl: './wind-component-fields.html',
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class WindComponentFields {
  protected readonly draft = inject(SetupDraft);
  readonly index = input.required<number>();
  readonly component = input.required<WindComponent>();
  readonly duplicated = output<void>();

  protected readonly patterns: Choice[] = [
    { value: 'uniform', label: 'uniform' },
    { value: 'zonalBelt', label: 'zonal belt' },
    { value: 'gaussianPatch', label: 'Gaussian patch' },
    { value: 'linearShear', label: 'equatorial shear' },
  ];
  protected readonly directions: Choice[] = [
    { value: 'eastward', label: 'eastward' },
    { value: 'northward', label: 'northward' },
  ];
  protected readonly seasons: Choice[] = [
    { value: 'steady', label: 'steady' },
    { value: 'switchOn', label: 'smooth switch-on' },
    { value: 'annual', label: 'annual' },
    { value: 'semiannual', label: 'semiannual' },
    { value: 'all', label: 'mean and harmonics' },
  ];
  protected readonly pattern = computed<WindPattern>(() => this.component().pattern);
  /** Stays as chosen while a number passes through zero; follows a setup that fits it no longer. */
  protected readonly seasonKind = linkedSignal<Season, SeasonKind>({
    source: () => this.component().season,
    computation: (season, before) => (before && fitsKind(season, before.value) ? before.value : kindOf(season)),
  });
  protected readonly isNew = computed(() => this.draft.change(this.base()) !== null);
  protected readonly base = computed(() => `/wind/components/${this.index()}`);

  protected choosePattern(kind: string): void {
    this.draft.set(
      `${this.base()}/pattern`,
      newPattern(kind as WindPattern['kind'], this.draft.readable(), this.component().pattern),
    );
  }

  protected chooseSeason(kind: string): void {
    const chosen = kind as SeasonKind;
    this.draft.set(`${this.base()}/season`, asKind(this.component().season, chosen));
    this.seasonKind.set(chosen);
  }

  protected shows(part: 'mean' | 'switchOn' | 'annual' | 'semiannual'): boolean {
    const kind = this.seasonKind();
    return kind === 'all' || kind === part || (part === 'mean' && (kind === 'steady' || kind === 'switchOn'));
  }
}
