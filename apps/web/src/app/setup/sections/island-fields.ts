import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { MatButton } from '@angular/material/button';
import type { Island } from '@halfdeep/ocean';
import type { Choice } from '../../shared/choice-field/choice-field';
import { TextField } from '../../shared/text-field/text-field';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupText } from '../fields/setup-text';
import { wasText } from '../fields/was-text';
import { SetupDraft } from '../setup-draft';
import { sameValue } from '../setup-pointer';
import { readPolygon, writePolygon } from './polygon-text';

/** One island, a box or a ring of points. */
@Component({
  selector: 'app-island-fields',
  imports: [MatButton, SetupChoice, SetupQuantity, SetupText, TextField],
  template: `
    <div class="line">
      <app-setup-text [at]="at('name')" label="Name of the island" placeholder="may be empty" />
      <app-setup-choice [at]="at('kind')" label="Shape" [choices]="kinds" [asks]="true" (chosen)="reshape($event)" />
      <span></span>
      <button
        mat-button
        class="small"
        type="button"
        [attr.aria-label]="'Remove ' + (island().name || 'this island')"
        (click)="draft.remove('/basin/islands', index())"
      >
        Remove
      </button>
    </div>
    @if (island().kind === 'box') {
      <div class="abreast">
        <app-setup-quantity [at]="at('westDeg')" of="longitude" label="West edge" why="" />
        <app-setup-quantity [at]="at('eastDeg')" of="longitude" label="East edge" why="" />
        <app-setup-quantity [at]="at('southDeg')" of="latitude" label="South edge" why="" />
        <app-setup-quantity [at]="at('northDeg')" of="latitude" label="North edge" why="" />
      </div>
    } @else {
      <app-text-field
        label="Points, ° E and ° N"
        [rows]="4"
        why="One point a line: longitude, then latitude. The last joins the first."
        [remark]="was()"
        [refusal]="pointsProblem()"
        [value]="text()"
        (valueChange)="readPoints($event)"
      />
    }
  `,
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class IslandFields {
  protected readonly draft = inject(SetupDraft);
  readonly index = input.required<number>();
  readonly island = input.required<Island>();
  protected readonly kinds: Choice[] = [
    { value: 'box', label: 'box' },
    { value: 'polygon', label: 'polygon' },
  ];
  protected readonly text = signal('');
  private readonly unreadable = signal<string | null>(null);

  /** What is wrong with the ring: a line that is no point, else the first problem below its pointer. */
  protected readonly pointsProblem = computed(() => {
    const pointer = this.at('points');
    const below = [...this.draft.problems()].find(([place]) => place === pointer || place.startsWith(`${pointer}/`));
    return this.unreadable() ?? below?.[1] ?? null;
  });

  protected readonly was = computed(() => wasText(this.draft.change(this.at('points'))));

  constructor() {
    effect(() => {
      const island = this.island();
      if (island.kind !== 'polygon') return;
      untracked(() => {
        const reading = readPolygon(this.text());
        const shown = 'points' in reading ? reading.points : [];
        if (sameValue(shown, island.points)) return;
        this.unreadable.set(null);
        this.text.set(writePolygon(island.points));
      });
    });
  }

  protected at(field: string): string {
    return `/basin/islands/${this.index()}/${field}`;
  }

  protected readPoints(text: string): void {
    this.text.set(text);
    const reading = readPolygon(text);
    this.unreadable.set('problem' in reading ? reading.problem : null);
    this.draft.set(this.at('points'), 'points' in reading ? reading.points : []);
  }

  /** A box becomes its four corners, a ring the box around it. */
  protected reshape(kind: string): void {
    const island = this.island();
    const { name } = island;
    const pointer = `/basin/islands/${this.index()}`;
    if (kind === 'polygon' && island.kind === 'box') {
      const { westDeg, eastDeg, southDeg, northDeg } = island;
      const points = [
        [westDeg, southDeg],
        [eastDeg, southDeg],
        [eastDeg, northDeg],
        [westDeg, northDeg],
      ];
      this.draft.set(pointer, { kind, name, points });
    } else if (kind === 'box' && island.kind === 'polygon') {
      const [longitudes, latitudes] = [island.points.map((point) => point[0]), island.points.map((point) => point[1])];
      const edge = (values: number[], pick: (...numbers: number[]) => number) =>
        values.length ? pick(...values) : null;
      this.draft.set(pointer, {
        kind,
        name,
        westDeg: edge(longitudes, Math.min),
        eastDeg: edge(longitudes, Math.max),
        southDeg: edge(latitudes, Math.min),
        northDeg: edge(latitudes, Math.max),
      });
    }
  }
}
