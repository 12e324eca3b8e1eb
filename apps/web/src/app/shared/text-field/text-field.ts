import { ChangeDetectionStrategy, Component, effect, input, model, untracked, ViewEncapsulation } from '@angular/core';
import { FormControl, ReactiveFormsModule } from '@angular/forms';
import { type ErrorStateMatcher } from '@angular/material/core';
import { MatFormFieldModule } from '@angular/material/form-field';
import { MatInputModule } from '@angular/material/input';

/** A line of words, or several, in the hand of the quantity field. */
@Component({
  selector: 'app-text-field',
  imports: [MatFormFieldModule, MatInputModule, ReactiveFormsModule],
  template: `
    <mat-form-field appearance="outline" floatLabel="always" subscriptSizing="dynamic" class="hd-field hd-text">
      <mat-label>{{ label() }}</mat-label>
      @if (rows() > 1) {
        <textarea
          matInput
          [rows]="rows()"
          [formControl]="control"
          [errorStateMatcher]="matcher"
          [placeholder]="placeholder()"
          [attr.maxlength]="maxLength()"
          (input)="value.set(control.value)"
        ></textarea>
      } @else {
        <input
          matInput
          type="text"
          autocomplete="off"
          [formControl]="control"
          [errorStateMatcher]="matcher"
          [placeholder]="placeholder()"
          [attr.maxlength]="maxLength()"
          (input)="value.set(control.value)"
        />
      }
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
export class TextField {
  readonly label = input.required<string>();
  readonly why = input('');
  readonly remark = input('');
  readonly placeholder = input('');
  readonly refusal = input<string | null>(null);
  readonly rows = input(1);
  readonly maxLength = input<number>();
  readonly value = model('');
  protected readonly control = new FormControl('', { nonNullable: true });
  protected readonly matcher: ErrorStateMatcher = { isErrorState: () => this.refusal() !== null };

  constructor() {
    effect(() => {
      const value = this.value();
      untracked(() => {
        if (this.control.value !== value) this.control.setValue(value);
      });
    });
  }
}
