import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { ChoiceField, type Choice } from '../../shared/choice-field/choice-field';
import { BasinMap } from '../../shared/basin-map/basin-map';
import { freeEdges, newIsland, newSponge } from '../blank-setup';
import { SetupChoice } from '../fields/setup-choice';
import { SetupQuantity } from '../fields/setup-quantity';
import { SetupText } from '../fields/setup-text';
import { SetupDraft } from '../setup-draft';
import { IslandFields } from './island-fields';
import { SectionFrame } from './section-frame';

/** Where the water is: edges, the plane and its rotation, coast and islands. */
@Component({
  selector: 'app-basin-section',
  imports: [BasinMap, ChoiceField, IslandFields, MatButton, SectionFrame, SetupChoice, SetupQuantity, SetupText],
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
    { value: 'spherical', label: 'spherical band' },
  ];
  protected readonly edges: Choice[] = [
    { value: 'south', label: 'south' },
    { value: 'north', label: 'north' },
    { value: 'west', label: 'west' },
    { value: 'east', label: 'east' },
  ];
  protected readonly winds: Choice[] = [
    { value: 'true', label: 'falls to nothing' },
    { value: 'false', label: 'blows as outside' },
  ];
  protected readonly coastGrids: Choice[] = [
    { value: 'own', label: 'the run’s own' },
    { value: 'other', label: 'a grid of its own' },
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
  /** A plane touches the sphere somewhere; a band is the sphere itself. */
  protected readonly touches = computed(() => {
    const { geometry } = this.basin();
    return geometry === 'midlatitude' || geometry === 'fplane';
  });
  protected readonly hasLand = computed(
    () => this.basin().westernCoast.kind === 'slanting' || this.basin().islands.length > 0,
  );
  protected readonly full = computed(() => freeEdges(this.basin()).length === 0);
  protected readonly spongesProblem = computed(() => this.draft.problems().get('/basin/sponges') ?? null);
  /** A problem of the list of islands itself, for example too many. */
  protected readonly islandsProblem = computed(() => this.draft.problems().get('/basin/islands') ?? null);

  protected close(periodic: string): void {
    this.draft.set('/basin/zonallyPeriodic', periodic === 'true');
    // A periodic basin has no western wall that could slant, and no west or east edge for a sponge.
    if (periodic !== 'true') return;
    this.draft.set('/basin/westernCoast', { kind: 'rectangular' });
    const kept = this.basin().sponges.filter(({ edge }) => edge === 'south' || edge === 'north');
    if (kept.length < this.basin().sponges.length) this.draft.set('/basin/sponges', kept);
  }

  protected shape(kind: string): void {
    const { westDeg, eastDeg } = this.draft.readable().basin;
    const atNorthDeg = Math.round((westDeg + (eastDeg - westDeg) / 10) * 100) / 100;
    this.draft.set(
      '/basin/westernCoast',
      kind === 'slanting' ? { kind, atSouthDeg: westDeg, atNorthDeg } : { kind: 'rectangular' },
    );
  }

  protected ownCoastGrid(choice: string): void {
    const { spacingLongitudeDeg, spacingLatitudeDeg } = this.draft.readable().numerics;
    this.draft.set(
      '/basin/coastSpacing',
      choice === 'other' ? { longitudeDeg: spacingLongitudeDeg, latitudeDeg: spacingLatitudeDeg } : null,
    );
  }

  protected addSponge(): void {
    const sponge = newSponge({ basin: { ...this.draft.readable().basin, sponges: this.basin().sponges } });
    if (sponge) this.draft.insert('/basin/sponges', sponge);
  }

  protected addIsland(kind: 'box' | 'polygon'): void {
    this.draft.insert('/basin/islands', newIsland(this.draft.readable(), kind));
  }
}
