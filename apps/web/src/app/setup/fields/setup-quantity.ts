import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { LIMITS, type Limit, type LimitName } from '@halfdeep/ocean';
import { QuantityField } from '../../shared/quantity-field/quantity-field';
import { SetupDraft } from '../setup-draft';
import { wasText } from './was-text';

/** Units as they are said. */
const SPOKEN: Record<string, string> = {
  '° E': 'degrees east',
  '° N': 'degrees north',
  '°': 'degrees',
  m: 'metres',
  'm/s²': 'metres per second squared',
  '1/s': 'per second',
  K: 'kelvins',
  'm²/s': 'square metres per second',
  'N/m²': 'newtons per square metre',
  '×': 'times',
  d: 'days',
  km: 'kilometres',
  '1/d': 'per day',
  '1/(m s)': 'per metre and second',
};

/** A number of the setup, found by its pointer: range, reason and default of LIMITS, what is wrong, what the parent had. */
@Component({
  selector: 'app-setup-quantity',
  imports: [QuantityField],
  template: `<app-quantity-field
    [label]="label() || limit().label"
    [symbol]="symbol()"
    [unit]="unit() ?? limit().unit"
    [spokenUnit]="spoken()"
    [why]="why() ?? limit().why"
    [remark]="remark()"
    [min]="limit().min"
    [max]="limit().max"
    [multipleOf]="limit().multipleOf"
    [placeholder]="placeholder()"
    [refusal]="refusal()"
    [caution]="caution()"
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
export class SetupQuantity {
  protected readonly draft = inject(SetupDraft);
  /** JSON pointer into the setup. */
  readonly at = input.required<string>();
  readonly of = input.required<LimitName>();
  readonly label = input('');
  readonly symbol = input('');
  readonly unit = input<string>();
  readonly why = input<string>();
  /** What an empty field that may be empty stands for. */
  readonly placeholder = input('');

  protected readonly limit = computed<Limit>(() => LIMITS[this.of()]);
  protected readonly spoken = computed(() => SPOKEN[this.unit() ?? this.limit().unit] ?? '');
  protected readonly value = computed(() => {
    const value = this.draft.at(this.at());
    return typeof value === 'number' ? value : null;
  });
  protected readonly remark = computed(() => wasText(this.draft.change(this.at())));
  protected readonly refusal = computed(() => {
    const problem = this.draft.problems().get(this.at());
    if (problem !== undefined) return problem;
    const check = this.draft.check(this.at());
    return check?.verdict === 'refuse' ? `Refused: ${check.reason}` : null;
  });
  protected readonly caution = computed(() => {
    const check = this.draft.check(this.at());
    return check?.verdict === 'caution' ? check.reason : null;
  });
}
