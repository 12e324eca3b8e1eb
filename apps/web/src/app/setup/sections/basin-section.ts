import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import type { Choice } from '../../shared/choice-field/choice-field';
import { BasinMap } from '../../shared/basin-map/basin-map';
import { newIsland } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupText } from '../fields/setup-text';
import { SetupDraft } from '../setup-draft';
import { IslandFields } from './island-fields';
import { SectionFrame } from './section-frame';

/** Where the water is: edges, the plane and its rotation, coast and islands. */
@Component({
  selector: 'app-basin-section',
  imports: [BasinMap, IslandFields, MatButton, SectionFrame, SetupChoice, SetupQuantity, SetupText],
  templateUrl: './basin-section.html',
  styleUrl: './setup-fields.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class BasinSection {
  protected readonly draft = inject(SetupDraft);
  protected readonly geometries: Choice[] = [
    { value: 'equatorial', label: 'equatorial β-plane' },
    { value: 'midlatitude', label: 'mid-latitude β-plane' },
    { value: 'fplane', label: 'f-plane' },
  ];
  protected readonly closures: Choice[] = [
    { value: 'false', label: 'closed' },
    { value: 'true', label: 'zonally periodic' },
  ];
  protected readonly basin = computed(() => this.draft.value().basin);
  protected readonly coasts: Choice[] = [
    { value: 'rectangular', label: 'along the west edge' },
    { value: 'slanting', label: 'slanting' },
  ];
  protected readonly middleDeg = computed(() => {
    const { basin } = this.draft.readable();
    return `middle, ${((basin.southDeg + basin.northDeg) / 2).toFixed(1)}`;
  });
  /** A problem of the list of islands itself, for example too many. */
  protected readonly islandsProblem = computed(() => this.draft.problems().get('/basin/islands') ?? null);

  protected close(periodic: string): void {
    this.draft.set('/basin/zonallyPeriodic', periodic === 'true');
    // A periodic basin has no western wall that could slant.
    if (periodic === 'true') this.draft.set('/basin/westernCoast', { kind: 'rectangular' });
  }

  protected shape(kind: string): void {
    const { westDeg, eastDeg } = this.draft.readable().basin;
    const atNorthDeg = Math.round((westDeg + (eastDeg - westDeg) / 10) * 100) / 100;
    this.draft.set(
      '/basin/westernCoast',
      kind === 'slanting' ? { kind, atSouthDeg: westDeg, atNorthDeg } : { kind: 'rectangular' },
    );
  }

  protected addIsland(kind: 'box' | 'polygon'): void {
    this.draft.insert('/basin/islands', newIsland(this.draft.readable(), kind));
  }
}
