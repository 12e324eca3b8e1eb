const BAR_CELLS = 30;
const REDRAW_MS = 100;
const EVERY_PERCENT = 10;

/** Where progress is written: standard error, in practice. */
export interface ProgressTarget {
  write(text: string): unknown;
  isTTY?: boolean;
  columns?: number;
}

export interface ProgressState {
  /** 0 … 1. */
  share: number;
  day: number;
  totalDays: number;
  /** Null before there is something to go by. */
  secondsLeft: number | null;
  cellStepsPerSecond: number | null;
}

/** A bar that is redrawn on a terminal; elsewhere a line every ten per cent. */
export class ProgressLine {
  private drawnAt = -Infinity;
  private told = 0;
  private width = 0;

  constructor(
    private readonly target: ProgressTarget,
    private readonly now: () => number = () => performance.now(),
  ) {}

  show(state: ProgressState): void {
    if (this.target.isTTY) this.draw(state);
    else this.tell(state);
  }

  /** Leaves the bar as it stands and goes on in a new line. */
  end(): void {
    if (this.width > 0) this.target.write('\n');
    this.width = 0;
  }

  private draw(state: ProgressState): void {
    const at = this.now();
    if (state.share < 1 && at - this.drawnAt < REDRAW_MS) return;
    this.drawnAt = at;
    const filled = Math.floor(BAR_CELLS * state.share);
    const bar = `${'█'.repeat(filled)}${'░'.repeat(BAR_CELLS - filled)}`;
    const line = `${bar} ${words(state)}`.slice(0, Math.max(20, (this.target.columns ?? 120) - 1));
    this.target.write(`\r${line.padEnd(this.width)}`);
    this.width = line.length;
  }

  private tell(state: ProgressState): void {
    const percent = Math.floor((100 * state.share) / EVERY_PERCENT) * EVERY_PERCENT;
    if (percent <= this.told) return;
    this.told = percent;
    this.target.write(`${words(state)}\n`);
  }
}

function words({ share, day, totalDays, secondsLeft, cellStepsPerSecond }: ProgressState): string {
  const parts = [`${String(Math.floor(100 * share)).padStart(3)} %`, `day ${round(day)} of ${round(totalDays)}`];
  if (cellStepsPerSecond !== null) parts.push(`${(cellStepsPerSecond / 1e6).toFixed(1)} million cell-steps/s`);
  if (share < 1 && secondsLeft !== null) parts.push(`${duration(secondsLeft)} left`);
  return parts.join(', ');
}

const round = (days: number) => String(Math.round(days));

/** "2 h 5 min", "1 min 12 s", "9 s". */
export function duration(seconds: number): string {
  const whole = Math.max(0, Math.ceil(seconds));
  const [hours, minutes] = [Math.floor(whole / 3600), Math.floor(whole / 60) % 60];
  if (hours > 0) return `${hours} h ${minutes} min`;
  return minutes > 0 ? `${minutes} min ${whole % 60} s` : `${whole} s`;
}
