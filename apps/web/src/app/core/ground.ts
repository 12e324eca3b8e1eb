import { DOCUMENT, Injectable, computed, inject, signal } from '@angular/core';
import { keepText } from './kept';

export type GroundName = 'paper' | 'ink';
const KEY = 'halfdeep.ground';

/** Paper or ink. The system decides until a person chooses; the choice is kept on this machine. */
@Injectable({ providedIn: 'root' })
export class Ground {
  private readonly document = inject(DOCUMENT);
  private readonly system = this.document.defaultView?.matchMedia?.('(prefers-color-scheme: dark)') ?? null;
  private readonly systemIsDark = signal(this.system?.matches ?? false);
  private readonly chosen = signal<GroundName | null>(this.read());

  /** What is on screen now; plots redraw when it changes. */
  readonly name = computed<GroundName>(() => this.chosen() ?? (this.systemIsDark() ? 'ink' : 'paper'));

  constructor() {
    this.system?.addEventListener('change', (event) => this.systemIsDark.set(event.matches));
  }

  choose(name: GroundName): void {
    this.chosen.set(name);
    this.document.documentElement.dataset['theme'] = name;
    keepText(KEY, name);
  }

  private read(): GroundName | null {
    const name = this.document.documentElement.dataset['theme'];
    return name === 'paper' || name === 'ink' ? name : null;
  }
}
