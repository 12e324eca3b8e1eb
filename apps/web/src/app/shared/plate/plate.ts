import { ChangeDetectionStrategy, Component, computed, inject, input, output, signal } from '@angular/core';
import { MatDialog } from '@angular/material/dialog';
import { toApiProblem } from '../../core/problem';
import { DataState } from '../data-state/data-state';
import { type PlotTable } from './csv';
import { DataTableDialog } from './data-table-dialog';
import { FigureSaver, type SavedFigure, type SavedPanel, fileName } from './save-figure';

/** What a plate can save: its panels in the paper theme, and its numbers. */
export interface PlateSource {
  panels: () => Promise<SavedPanel[]>;
  table: (notes: string[]) => PlotTable;
}

let counter = 0;

/**
 * A sheet with a figure on it: name, one remark, controls (attribute `plateControls`), the plot, a caption, and the words
 * that save it. Says what will be here while it is empty, and what is safe when it could not be read.
 */
@Component({
  selector: 'app-plate',
  imports: [DataState],
  templateUrl: './plate.html',
  styleUrl: './plate.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Plate {
  private readonly saver = inject(FigureSaver);
  private readonly dialog = inject(MatDialog);
  protected readonly headingId = `plate-${counter++}`;

  readonly name = input.required<string>();
  readonly remark = input('');
  readonly caption = input.required<string>();
  readonly state = input<'ready' | 'empty' | 'loading' | 'error'>('ready');
  readonly stateHeading = input('');
  readonly stateAbout = input('');
  readonly error = input<unknown>(null);
  /** "Last good record: day 1 240", shown with an error. */
  readonly lastGood = input('');
  /** What could not be read of a plot that stays: "Not read beyond day 600; what is drawn is good." */
  readonly partial = input('');
  readonly source = input<PlateSource | null>(null);
  /** Who and what, for the notes and the file name: "Strong, run of …". */
  readonly about = input<string[]>([]);
  readonly again = output();

  protected readonly saveProblem = signal('');
  protected readonly problem = computed(() => (this.error() === null ? null : toApiProblem(this.error())));
  protected readonly waitingState = computed(() => {
    const state = this.state();
    return state === 'ready' ? 'loading' : state;
  });

  protected savePng(): void {
    void this.save((figure) => this.saver.savePng(figure));
  }
  protected saveSvg(): void {
    void this.save((figure) => this.saver.saveSvg(figure));
  }
  protected saveData(): void {
    const source = this.source();
    if (source) this.saver.saveCsv(this.file(), source.table(this.notes()));
  }
  protected showTable(): void {
    const source = this.source();
    if (!source) return;
    const data = { title: this.name(), caption: this.caption(), table: source.table(this.notes()) };
    this.dialog.open(DataTableDialog, { data, maxWidth: '92vw', autoFocus: 'dialog' });
  }

  private async save(write: (figure: SavedFigure) => Promise<void>): Promise<void> {
    const source = this.source();
    if (!source) return;
    this.saveProblem.set('');
    try {
      const title = [this.name(), this.about()[0] ?? ''].filter(Boolean).join(' · ');
      await write({ name: this.file(), title, caption: this.caption(), panels: await source.panels() });
    } catch (error) {
      const why = error instanceof Error ? error.message : 'The picture could not be drawn.';
      this.saveProblem.set(`Not saved. ${why}`);
    }
  }

  private file(): string {
    return fileName(this.about()[0] ?? '', this.name());
  }

  private notes(): string[] {
    return [...this.about(), `${this.name()}. ${this.caption()}`];
  }
}
