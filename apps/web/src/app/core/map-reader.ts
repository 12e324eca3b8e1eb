import { signal } from '@angular/core';
import { type RunFollower } from './run-follower';
import { type Slice } from './slices';

export interface MapShown {
  slice: Slice;
  variable: string;
  record: number;
}

/**
 * Reads one map after another: while a request is under way only the latest wish is kept, so that a slider that is dragged
 * asks for what it stops at and not for everything that it passes. The last map stays until the next has come.
 */
export class MapReader {
  readonly shown = signal<MapShown | null>(null);
  readonly error = signal<unknown>(null);
  /** True while the map on show is not the one wanted. */
  readonly behind = signal(false);
  private wanted: { variable: string; record: number } | null = null;
  private reading = false;

  constructor(private readonly follower: RunFollower) {}

  want(variable: string, record: number): void {
    this.wanted = { variable, record };
    const shown = this.shown();
    const same = shown?.variable === variable && shown.record === record;
    this.behind.set(!same);
    if (!same && !this.reading) void this.read();
  }

  /** After an error. */
  again(): void {
    this.error.set(null);
    if (this.wanted && !this.reading) void this.read();
  }

  private async read(): Promise<void> {
    this.reading = true;
    while (this.wanted) {
      const { variable, record } = this.wanted;
      try {
        const slice = await this.follower.map(variable, record);
        this.error.set(null);
        this.shown.set({ slice, variable, record });
      } catch (error) {
        this.error.set(error);
        break;
      }
      if (this.wanted.variable === variable && this.wanted.record === record) break;
    }
    this.reading = false;
    const shown = this.shown();
    this.behind.set(shown?.variable !== this.wanted?.variable || shown?.record !== this.wanted?.record);
  }
}
