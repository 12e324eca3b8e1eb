import { IntegrationFailure, SketchRun, sketchSetup, type Fingerprint, type Setup, type Sketch, type SketchLine, type SketchRows } from '@halfdeep/ocean'; // prettier-ignore

/** What the form asks of the thread that sketches. */
export type SketchOrder =
  { kind: 'start'; setup: Setup; line: SketchLine } | { kind: 'line'; line: SketchLine } | { kind: 'stop' };

/** How far a sketch has come, and after how many seconds of work. */
export interface SketchProgress {
  step: number;
  totalSteps: number;
  day: number;
  seconds: number;
}

export type SketchReport =
  | { kind: 'planned'; sketch: Pick<Sketch, 'setup' | 'notes' | 'coarser' | 'cellSteps'> }
  /** No sketch of this setup can be made. */
  | { kind: 'none'; reason: string }
  | { kind: 'rows'; line: SketchLine; rows: SketchRows; progress: SketchProgress }
  | { kind: 'ended'; fingerprint: Fingerprint }
  | { kind: 'failed'; reason: string };

/** Work between two looks at what the form wants, ms. */
const SLICE_MS = 50;
/** Between two reports of rows, ms: a picture needs a moment to be drawn before the next one. */
const REPORT_MS = 400;

/** Plans a sketch, integrates it slice by slice and reports rows of the line that is asked for. */
export class SketchWork {
  private run: SketchRun | null = null;
  private line: SketchLine | null = null;
  private sent = 0;
  private seconds = 0;
  private going = false;
  /** When rows were reported last, ms of the page's clock. */
  private reported = -Infinity;

  /** `later` calls back once other messages had their turn. */
  constructor(
    private readonly report: (report: SketchReport) => void,
    private readonly later: (go: () => void) => void,
  ) {}

  take(order: SketchOrder): void {
    switch (order.kind) {
      case 'start':
        this.line = order.line;
        this.start(order.setup);
        break;
      case 'line':
        this.line = order.line;
        this.sent = 0;
        this.sendRows();
        break;
      case 'stop':
        this.going = false;
        this.sendRows();
    }
  }

  private start(setup: Setup): void {
    try {
      const { setup: coarse, notes, coarser, cellSteps } = sketchSetup(setup);
      this.run = new SketchRun(coarse);
      this.report({ kind: 'planned', sketch: { setup: coarse, notes, coarser, cellSteps } });
    } catch (error) {
      if (!(error instanceof RangeError)) throw error;
      this.report({ kind: 'none', reason: error.message });
      return;
    }
    this.going = true;
    this.sendRows();
    this.later(() => this.go());
  }

  private go(): void {
    const { run } = this;
    if (!run || !this.going) return;
    const began = performance.now();
    try {
      while (!run.ended && performance.now() - began < SLICE_MS) run.advance();
    } catch (error) {
      if (!(error instanceof IntegrationFailure)) throw error;
      this.going = false;
      this.sendRows();
      this.report({ kind: 'failed', reason: error.message });
      return;
    }
    const now = performance.now();
    this.seconds += (now - began) / 1000;
    if (run.ended || now - this.reported >= REPORT_MS) this.sendRows();
    if (run.ended) {
      this.going = false;
      this.report({ kind: 'ended', fingerprint: run.fingerprint() });
    } else this.later(() => this.go());
  }

  private sendRows(): void {
    const { run, line } = this;
    if (!run || !line) return;
    const { step, totalSteps, day } = run;
    this.reported = performance.now();
    const rows = run.rowsOf(line, this.sent);
    this.sent = run.rows;
    this.report({ kind: 'rows', line, rows, progress: { step, totalSteps, day, seconds: this.seconds } });
  }
}
