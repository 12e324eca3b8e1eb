import type { Column } from '@halfdeep/ocean';

/** Last value and mean (or, of an integral, sum) of a column over all records; null before the first. */
export interface ColumnSummary {
  label: string;
  unit: string;
  kind: Column['kind'];
  last: number | null;
  mean?: number | null;
  sum?: number | null;
}

/** Adds up the records of a series as they come. */
export class SeriesSummary {
  private records = 0;
  private readonly sums: Float64Array;
  private last: Float64Array | null = null;

  constructor(private readonly columns: readonly Column[]) {
    this.sums = new Float64Array(columns.length);
  }

  add(values: Float64Array): void {
    this.records += 1;
    this.last = values;
    for (let k = 0; k < this.sums.length; k++) this.sums[k] += values[k];
  }

  /** Each column by its name. */
  get(): Record<string, ColumnSummary> {
    return Object.fromEntries(
      this.columns.map(({ name, label, unit, kind }, k) => {
        const sum = this.records > 0 ? this.sums[k] : null;
        const over = kind === 'integral' ? { sum } : { mean: sum === null ? null : sum / this.records };
        return [name, { label, unit, kind, last: this.last?.[k] ?? null, ...over }];
      }),
    );
  }
}
