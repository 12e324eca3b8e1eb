import { ChangeDetectionStrategy, Component, computed, input, linkedSignal, output, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatFormField, MatLabel, MatSuffix } from '@angular/material/form-field';
import { MatInput } from '@angular/material/input';
import { MatRadioButton, MatRadioGroup } from '@angular/material/radio';
import { MatSlider, MatSliderThumb } from '@angular/material/slider';

export interface CapChange {
  cap: number;
  whenLowered: 'drain' | 'checkpoint';
}

/** The cap on runs at once, by slider or number, and what happens to running work when it falls below what runs. */
@Component({
  selector: 'app-cap-form',
  imports: [
    MatButton,
    MatFormField,
    MatInput,
    MatLabel,
    MatRadioButton,
    MatRadioGroup,
    MatSlider,
    MatSliderThumb,
    MatSuffix,
  ],
  templateUrl: './cap-form.html',
  styleUrl: './cap-form.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class CapForm {
  readonly cap = input.required<number>();
  readonly maxCap = input.required<number>();
  /** How many compute now. */
  readonly running = input.required<number>();
  readonly busy = input(false);
  readonly changed = output<CapChange>();

  /** What the person is about to set; starts again whenever the server's cap changes. */
  protected readonly draft = linkedSignal(() => this.cap());
  protected readonly whenLowered = signal<CapChange['whenLowered']>('drain');
  protected readonly valid = computed(
    () => Number.isInteger(this.draft()) && this.draft() >= 1 && this.draft() <= this.maxCap(),
  );
  /** Runs beyond the new cap. */
  protected readonly beyond = computed(() => (this.valid() ? Math.max(0, this.running() - this.draft()) : 0));

  protected typed(text: string): void {
    this.draft.set(text.trim() === '' ? NaN : Number(text));
  }

  protected submit(event: Event): void {
    event.preventDefault();
    if (this.valid() && this.draft() !== this.cap() && !this.busy())
      this.changed.emit({ cap: this.draft(), whenLowered: this.whenLowered() });
  }
}
