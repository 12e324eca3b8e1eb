import { ChangeDetectionStrategy, Component, computed, inject, input, output } from '@angular/core';
import { ChoiceField, type Choice } from '../../shared/choice-field/choice-field';
import { SetupDraft } from '../setup-draft';
import { wasText } from './was-text';

/** A choice of the setup, found by its pointer. Writes by itself unless `asks` is set: then the section decides what a change means. */
@Component({
  selector: 'app-setup-choice',
  imports: [ChoiceField],
  template: `<app-choice-field
    [label]="label()"
    [choices]="choices()"
    [why]="why()"
    [remark]="remark()"
    [refusal]="draft.problems().get(at()) ?? null"
    [value]="value()"
    (valueChange)="take($event)"
  />`,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {
    '[attr.data-pointer]': 'at()',
    '[class.hd-changed]': 'remark() !== ""',
    style: 'display: block; min-width: 0',
  },
})
export class SetupChoice {
  protected readonly draft = inject(SetupDraft);
  readonly at = input.required<string>();
  readonly label = input.required<string>();
  readonly choices = input.required<readonly Choice[]>();
  readonly why = input('');
  readonly asks = input(false);
  readonly chosen = output<string>();

  protected readonly value = computed(() => this.draft.text(this.at()));
  /** A change of kind is told at the thing whose kind it is. */
  protected readonly remark = computed(() =>
    wasText(this.draft.change(this.at()) ?? this.draft.change(this.at().replace(/\/kind$/, ''))),
  );

  protected take(value: string): void {
    if (value === this.value()) return;
    if (!this.asks()) this.draft.set(this.at(), value);
    this.chosen.emit(value);
  }
}
