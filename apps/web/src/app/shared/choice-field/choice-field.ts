import { ChangeDetectionStrategy, Component, effect, input, model, untracked, ViewEncapsulation } from '@angular/core';
import { FormControl, ReactiveFormsModule } from '@angular/forms';
import { type ErrorStateMatcher } from '@angular/material/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';

/** One of a few named things. */
export interface Choice {
  value: string;
  label: string;
  disabled?: boolean;
}

/** A choice of named things in the hand of the quantity field; the browser's own list opens. */
@Component({
  selector: 'app-choice-field',
  imports: [MatFormFieldModule, MatInputModule, ReactiveFormsModule],
  template: `
    <mat-form-field appearance="outline" floatLabel="always" subscriptSizing="dynamic" class="hd-field hd-choice">
      <mat-label>{{ label() }}</mat-label>
      <select
        matNativeControl
        [formControl]="control"
        [errorStateMatcher]="matcher"
        (change)="value.set(control.value)"
      >
        @for (choice of choices(); track choice.value) {
          <option [value]="choice.value" [disabled]="choice.disabled ?? false">{{ choice.label }}</option>
        }
      </select>
      @if (refusal(); as reason) {
        <mat-error>{{ reason }}</mat-error>
      }
      @if (why() || remark()) {
        <mat-hint
          >{{ why() }}
          @if (remark()) {
            <span class="hd-remark">&ngsp;{{ remark() }}</span>
          }
        </mat-hint>
      }
    </mat-form-field>
  `,
  styleUrl: '../quantity-field/quantity-field.scss',
  encapsulation: ViewEncapsulation.None,
  changeDetection: ChangeDetectionStrategy.OnPush,
  host: { '[class.hd-refused]': 'refusal() !== null' },
})
export class ChoiceField {
  readonly label = input.required<string>();
  readonly choices = input.required<readonly Choice[]>();
  readonly why = input('');
  readonly remark = input('');
  readonly refusal = input<string | null>(null);
  readonly disabled = input(false);
  readonly value = model('');
  protected readonly control = new FormControl('', { nonNullable: true });
  protected readonly matcher: ErrorStateMatcher = { isErrorState: () => this.refusal() !== null };

  constructor() {
    effect(() => {
      const value = this.value();
      this.choices(); // options that arrive later must find their value again
      untracked(() => this.control.setValue(value));
    });
    effect(() => {
      if (this.disabled()) this.control.disable({ emitEvent: false });
      else this.control.enable({ emitEvent: false });
    });
  }
}
