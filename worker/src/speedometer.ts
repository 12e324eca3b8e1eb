/** Steps a second over the last few seconds. */
export class Speedometer {
  private readonly marks: { at: number; step: number }[] = [];

  constructor(private readonly windowMs = 5000) {}

  /** Notes that `step` was complete at `at` ms. */
  mark(step: number, at: number): void {
    this.marks.push({ at, step });
    while (this.marks.length > 2 && at - this.marks[1].at >= this.windowMs) this.marks.shift();
  }

  /** Null before there is something to go by. */
  stepsPerSecond(): number | null {
    const first = this.marks[0];
    const last = this.marks[this.marks.length - 1];
    if (!first || last.at - first.at < 100) return null;
    return ((last.step - first.step) * 1000) / (last.at - first.at);
  }
}
