import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { TextField } from '../../shared/text-field/text-field';
import { SetupDraft } from '../setup-draft';
import { wasText } from './was-text';

/** A name in the setup, found by its pointer. */
@Component({
  selector: 'app-setup-text',
  imports: [TextField],
  template: `<app-text-field
    [label]="label()"
    [why]="why()"
    [remark]="remark()"
    [placeholder]="placeholder()"
    [maxLength]="60"
    [refusal]="draft.problems().get(at()) ?? null"
    [value]="value()"
    (valueChange)="draft.set(at(), $event)"
  />`,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {
    '[attr.data-pointer]': 'at()',
    '[class.hd-changed]': 'remark() !== ""',
    style: 'display: block; min-width: 0',
  },
})
export class SetupText {
  protected readonly draft = inject(SetupDraft);
  readonly at = input.required<string>();
  readonly label = input.required<string>();
  readonly why = input('');
  readonly placeholder = input('');
  protected readonly value = computed(() => this.draft.text(this.at()));
  protected readonly remark = computed(() => wasText(this.draft.change(this.at())));
}
