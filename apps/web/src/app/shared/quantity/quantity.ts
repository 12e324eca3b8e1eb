import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type NumberOptions, numberParts, unitGap } from '../../core/format';

/** A number with its unit: thousands parted, exponent raised, the unit smaller and fainter. */
@Component({
  selector: 'app-quantity',
  template:
    '{{ parts().mantissa }}@if (parts().exponent !== null) {&#8239;×&#8239;10<sup>{{ exponent() }}</sup>}' +
    '@if (unit()) {{{ gap() }}<span class="u">{{ unit() }}</span>}',
  styles: ':host { white-space: nowrap; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Quantity {
  readonly value = input.required<number | null>();
  readonly unit = input('');
  /** How to round; see `core/format`. */
  readonly decimals = input<number>();
  readonly significant = input<number>();
  readonly signed = input(false);

  protected readonly parts = computed(() => {
    const options: NumberOptions = { signed: this.signed() };
    const [decimals, significant] = [this.decimals(), this.significant()];
    if (decimals !== undefined) options.decimals = decimals;
    if (significant !== undefined) options.significant = significant;
    return numberParts(this.value() ?? NaN, options);
  });
  protected readonly exponent = computed(() => String(this.parts().exponent ?? '').replace('-', '\u2212'));
  protected readonly gap = computed(() => unitGap(this.unit()));
}
