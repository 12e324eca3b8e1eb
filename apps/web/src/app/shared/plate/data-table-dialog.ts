import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import {
  MAT_DIALOG_DATA,
  MatDialogActions,
  MatDialogClose,
  MatDialogContent,
  MatDialogTitle,
} from '@angular/material/dialog';
import { formatNumber } from '../../core/format';
import { type PlotTable } from './csv';

export interface TableRequest {
  title: string;
  caption: string;
  table: PlotTable;
}

/** A page can hold so many cells and still answer; beyond that every n-th row or column is shown, and said. */
const MOST_ROWS = 200;
const MOST_COLUMNS = 24;

/** The numbers of a plate as a table: the whole when it is small, evenly thinned when it is not. */
@Component({
  selector: 'app-data-table-dialog',
  imports: [MatButton, MatDialogActions, MatDialogClose, MatDialogContent, MatDialogTitle],
  template: `
    <h2 mat-dialog-title>{{ request.title }}</h2>
    <mat-dialog-content>
      <p class="small quiet">{{ request.caption }} {{ thinning }}</p>
      <div class="scroll" tabindex="0" role="region" [attr.aria-label]="'Data of ' + request.title">
        <table class="numbers">
          <thead>
            <tr>
              @for (head of heads; track $index) {
                <th scope="col">{{ head }}</th>
              }
            </tr>
          </thead>
          <tbody>
            @for (row of rows; track $index) {
              <tr>
                @for (cell of row; track $index) {
                  <td>{{ cell }}</td>
                }
              </tr>
            } @empty {
              <tr>
                <td>No values yet.</td>
              </tr>
            }
          </tbody>
        </table>
      </div>
    </mat-dialog-content>
    <mat-dialog-actions>
      <button mat-stroked-button mat-dialog-close type="button">Close</button>
    </mat-dialog-actions>
  `,
  styles: `
    .scroll {
      max-height: 60vh;
      overflow: auto;
      margin-top: 8px;
    }
    th {
      position: sticky;
      top: 0;
      background: var(--hd-raised);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class DataTableDialog {
  protected readonly request = inject<TableRequest>(MAT_DIALOG_DATA);
  private readonly rowStep = Math.max(1, Math.ceil(this.request.table.rows / MOST_ROWS));
  private readonly columnStep = Math.max(1, Math.ceil((this.request.table.columns.length - 1) / MOST_COLUMNS));
  private readonly shown = (_: unknown, k: number) => k === 0 || (k - 1) % this.columnStep === 0;
  protected readonly heads = this.request.table.columns.filter(this.shown);
  protected readonly rows = Array.from({ length: Math.ceil(this.request.table.rows / this.rowStep) }, (_, k) =>
    this.request.table
      .row(k * this.rowStep)
      .filter(this.shown)
      .map((cell) => (typeof cell === 'number' ? formatNumber(cell, { significant: 5 }) : cell)),
  );
  protected readonly thinning = this.describeThinning();

  private describeThinning(): string {
    const parts: string[] = [];
    if (this.rowStep > 1) parts.push(`one row in ${this.rowStep}`);
    if (this.columnStep > 1) parts.push(`one column in ${this.columnStep}`);
    return parts.length ? `Shown here: ${parts.join(' and ')}; the data file holds all.` : '';
  }
}
