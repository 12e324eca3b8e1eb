import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  input,
  model,
  signal,
  untracked,
  ViewEncapsulation,
} from '@angular/core';
import { FormControl, ReactiveFormsModule } from '@angular/forms';
import { type ErrorStateMatcher } from '@angular/material/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';
import { plainDecimal, readDecimal, stepDecimal, writeDecimal } from './decimal-text';

/**
 * A number with its unit, and one line that says why it matters. The value is null while the field is empty and NaN
 * while it holds what cannot be read. Arrow keys step the last digit, Shift ten times.
 */
@Component({
  selector: 'app-quantity-field',
  imports: [MatFormFieldModule, MatInputModule, ReactiveFormsModule],
  templateUrl: './quantity-field.html',
  styleUrl: './quantity-field.scss',
  encapsulation: ViewEncapsulation.None,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: {
    '[class.hd-refused]': 'problem() !== null',
    '[class.hd-cautioned]': 'problem() === null && caution() !== null',
  },
})
export class QuantityField {
  readonly label = input.required<string>();
  /** Letter of the trade behind the label, drawn sloped. */
  readonly symbol = input('');
  readonly unit = input('');
  /** Unit in words for those who hear it; the sign itself when left out. */
  readonly spokenUnit = input('');
  readonly why = input('');
  /** A second remark, for example what the parent run had. */
  readonly remark = input('');
  readonly min = input<number>();
  readonly max = input<number>();
  readonly multipleOf = input<number>();
  /** What stands in an empty field that may be empty. */
  readonly placeholder = input('');
  readonly refusal = input<string | null>(null);
  readonly caution = input<string | null>(null);
  readonly disabled = input(false);
  readonly value = model<number | null>(null);

  protected readonly text = new FormControl('', { nonNullable: true });
  private readonly unreadable = signal<string | null>(null);
  /** The reason why the field is refused, or null. */
  protected readonly problem = computed(() => {
    const text = this.unreadable();
    return text === null ? this.refusal() : `“${text}” is not a number. Write it like 12.5, −3 or 1e−8.`;
  });
  protected readonly matcher: ErrorStateMatcher = { isErrorState: () => this.problem() !== null };
  protected readonly aria = plainDecimal;
  protected readonly valueNow = computed(() => {
    const value = this.value();
    return value !== null && Number.isFinite(value) ? value : null;
  });

  /** The label in the parts of its notch: words, sloped letter, unit for those who hear it. */
  protected readonly before = computed(() => this.label() + (this.symbol() ? ', ' : ''));
  protected readonly after = computed(() => (this.unit() ? `, ${this.spokenUnit() || this.unit()}` : ''));
  protected readonly valueText = computed(() => {
    const value = this.valueNow();
    return value === null ? null : `${writeDecimal(value)} ${this.spokenUnit() || this.unit()}`.trim();
  });

  constructor() {
    effect(() => {
      const value = this.value();
      untracked(() => this.show(value));
    });
    effect(() => {
      if (this.disabled()) this.text.disable({ emitEvent: false });
      else this.text.enable({ emitEvent: false });
    });
  }

  protected read(): void {
    const reading = readDecimal(this.text.value);
    this.unreadable.set(reading.kind === 'unreadable' ? reading.text : null);
    this.value.set(reading.kind === 'number' ? reading.value : reading.kind === 'empty' ? null : NaN);
  }

  protected step(event: KeyboardEvent): void {
    if ((event.key !== 'ArrowUp' && event.key !== 'ArrowDown') || event.altKey || event.ctrlKey || event.metaKey)
      return;
    const count = (event.key === 'ArrowUp' ? 1 : -1) * (event.shiftKey ? 10 : 1);
    const stepped = stepDecimal(this.text.value, count, {
      min: this.min(),
      max: this.max(),
      multipleOf: this.multipleOf(),
    });
    event.preventDefault();
    if (stepped === null) return;
    this.text.setValue(stepped);
    this.read();
  }

  /** Brings what was typed into the hand of the house, unless it would lose digits that say how fine the next step is. */
  protected tidy(): void {
    this.text.setValue(this.text.value.trim().replace(/-/g, '\u2212'));
  }

  /** A value from outside replaces the text; the text that already means it stays as it was typed. */
  private show(value: number | null): void {
    const reading = readDecimal(this.text.value);
    if (reading.kind === 'number' && reading.value === value) return;
    if (reading.kind === 'empty' && value === null) return;
    if (reading.kind === 'unreadable' && value !== null && Number.isNaN(value)) return;
    this.unreadable.set(null);
    this.text.setValue(writeDecimal(value));
  }
}
