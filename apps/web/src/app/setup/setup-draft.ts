import { computed, Injectable, linkedSignal, signal } from '@angular/core';
import { setupSchema } from '@halfdeep/contracts';
import {
  diffSetups,
  withLaterFields,
  type Check,
  type Preflight,
  type Remedy,
  type Setup,
  type SetupChange,
} from '@halfdeep/ocean';
import { blankSetup } from './blank-setup';
import { sameValue, toPointer, valueAt, withValueAt } from './setup-pointer';

/** The run that a sensitivity run is made from. */
export interface ParentRun {
  id: string;
  label: string;
  setup: Setup;
}

/**
 * The setup as it is being written. While a field is empty its number is null, so `setup()` is null until every field
 * reads well; fields are addressed by JSON pointer, as the schema, preflight, remedies and the API address them.
 */
@Injectable()
export class SetupDraft {
  private readonly written = signal<Setup>(blankSetup());
  private readonly labelWritten = signal<string | null>(null);
  private readonly fromServer = signal<ReadonlyMap<string, string>>(new Map());

  readonly parent = signal<ParentRun | null>(null);
  /** What the form was filled in with; a draft that equals it need not be kept. */
  readonly start = signal<Setup>(blankSetup());
  readonly preflight = signal<Preflight | null>(null);

  readonly value = this.written.asReadonly();
  private readonly parsed = computed(() => setupSchema.safeParse(this.written()));
  /** The setup when every field reads well, else null. */
  readonly setup = computed<Setup | null>(() => this.parsed().data ?? null);

  /** Sections and moorings that lie outside the basin, for example since its edges were moved. */
  readonly outside = computed<OutsidePlace[]>(() =>
    (this.parsed().error?.issues ?? []).flatMap(({ path: [output, list, index, field] }) => {
      if (output !== 'output' || (list !== 'sections' && list !== 'moorings') || typeof index !== 'number') return [];
      const pointer = toPointer([output, list, index, String(field)]);
      const value = this.at(pointer);
      return PLACE_FIELDS.has(String(field)) && typeof value === 'number' && Number.isFinite(value)
        ? [{ list, index, pointer, value }]
        : [];
    }),
  );
  /** The setup without what lies outside, when nothing else is wrong with it: its basin can be judged already. */
  private readonly withoutOutside = computed<Setup | null>(() => {
    const outside = this.outside();
    if (outside.length === 0) return null;
    return setupSchema.safeParse(without(this.written(), outside)).data ?? null;
  });
  /** What pictures and preflight go by. */
  readonly judged = computed<Setup | null>(() => this.setup() ?? this.withoutOutside());

  /** The last setup that could be judged: what pictures and preflight show while a field is half typed. */
  readonly readable = linkedSignal<Setup | null, Setup>({
    source: this.judged,
    computation: (setup, before) => setup ?? before?.value ?? blankSetup(),
  });

  /** What is wrong with a field, by pointer: the schema's word first, then the server's. */
  readonly problems = computed<ReadonlyMap<string, string>>(() => {
    const found = new Map(this.fromServer());
    for (const issue of this.parsed().error?.issues ?? []) {
      const pointer = toPointer(issue.path);
      if (!found.has(pointer) || this.fromServer().has(pointer)) found.set(pointer, issue.message);
    }
    return found;
  });

  readonly changes = computed<SetupChange[]>(() => {
    const parent = this.parent();
    // Places outside the basin are changes too, though it cannot be judged with them.
    const setup = this.withoutOutside() === null ? this.readable() : this.written();
    return parent ? diffSetups(withLaterFields(parent.setup), setup) : [];
  });

  private readonly changesByPointer = computed(
    () => new Map(this.changes().map((change) => [change.pointer, change] as const)),
  );

  /** The label proposed from the changes until somebody writes another. */
  readonly proposedLabel = computed(() => proposeLabel(this.parent(), this.changes()));
  readonly label = computed(() => this.labelWritten() ?? this.proposedLabel());
  readonly ownLabel = this.labelWritten.asReadonly();
  readonly touched = computed(
    () => this.labelWritten() !== null || !sameValue(this.written(), withLaterFields(this.start())),
  );

  at(pointer: string): unknown {
    return valueAt(this.written(), pointer);
  }

  /** A word or a yes-no at a pointer as text; '' for anything else. */
  text(pointer: string): string {
    const value = this.at(pointer);
    return typeof value === 'string' || typeof value === 'boolean' ? String(value) : '';
  }

  set(pointer: string, value: unknown): void {
    if (Object.is(this.at(pointer), value)) return;
    this.written.set(withValueAt(this.written(), pointer, value));
    this.forget(pointer);
  }

  setLabel(label: string): void {
    this.labelWritten.set(label);
    this.forget('/label');
  }

  /** Replaces everything that was written; what was kept before some fields existed gets their defaults. */
  fill(setup: Setup, label: string | null = null): void {
    this.written.set(withLaterFields(setup));
    this.labelWritten.set(label);
    this.fromServer.set(new Map());
  }

  /** Writes what a remedy says; false when a place that it names is no longer there. */
  apply(remedy: Remedy): boolean {
    let changed = this.written();
    try {
      for (const { pointer, value } of remedy.changes) changed = withValueAt(changed, pointer, value);
    } catch (error) {
      if (error instanceof RangeError) return false;
      throw error;
    }
    this.written.set(changed);
    for (const { pointer } of remedy.changes) this.forget(pointer);
    return true;
  }

  insert(pointer: string, item: unknown, index?: number): void {
    const list = this.list(pointer);
    const place = index ?? list.length;
    this.set(pointer, [...list.slice(0, place), item, ...list.slice(place)]);
  }

  remove(pointer: string, index: number): void {
    this.set(
      pointer,
      this.list(pointer).filter((_, k) => k !== index),
    );
  }

  /** Every place that lies outside moves to the nearest edge, two cells inside. */
  moveInside(): void {
    const { basin, numerics } = this.written();
    let moved = this.written();
    for (const { list, index, pointer, value } of this.outside()) {
      const alongLongitude =
        pointer.endsWith('/longitudeDeg') ||
        (list === 'sections' && this.written().output.sections[index]?.along === 'longitude');
      const [from, to, spacing] = alongLongitude
        ? [basin.westDeg, basin.eastDeg, numerics.spacingLongitudeDeg]
        : [basin.southDeg, basin.northDeg, numerics.spacingLatitudeDeg];
      const margin = Math.min(2 * spacing, (to - from) / 2);
      const inside = Math.min(Math.max(value, from + margin), to - margin);
      moved = withValueAt(moved, pointer, Number(inside.toPrecision(10)));
    }
    this.written.set(moved);
  }

  removeOutside(): void {
    this.written.set(without(this.written(), this.outside()));
  }

  private list(pointer: string): unknown[] {
    const list = this.at(pointer);
    return Array.isArray(list) ? (list as unknown[]) : [];
  }

  /** Problems of a 422 answer: pointers into the request body {label, setup, parentRunId}. */
  refuse(errors: readonly { pointer: string; detail: string }[]): void {
    this.fromServer.set(
      new Map(errors.map(({ pointer, detail }) => [pointer.replace(/^\/setup(?=\/|$)/, ''), detail])),
    );
  }

  /** The change from the parent that is about exactly this place, or null. */
  change(pointer: string): SetupChange | null {
    return this.changesByPointer().get(pointer) ?? null;
  }

  /** The worst check that is told at a field, passes left out. */
  check(pointer: string): Check | null {
    // Preflight sorts refusals before cautions before passes.
    return (
      this.preflight()?.checks.find((check) => check.verdict !== 'pass' && placesOf(check).includes(pointer)) ?? null
    );
  }

  /** What the server said about a place is old once the place, or what holds it, is written. */
  private forget(pointer: string): void {
    const kept = [...this.fromServer()].filter(
      ([at]) => at !== '' && !at.startsWith(pointer) && !pointer.startsWith(at),
    );
    if (kept.length !== this.fromServer().size) this.fromServer.set(new Map(kept));
  }
}

/** A place outside the basin: which item of which list, and the field that says so. */
export interface OutsidePlace {
  list: 'sections' | 'moorings';
  index: number;
  pointer: string;
  value: number;
}

const PLACE_FIELDS = new Set(['atDeg', 'longitudeDeg', 'latitudeDeg']);

function without(setup: Setup, outside: readonly OutsidePlace[]): Setup {
  const kept = <T>(list: OutsidePlace['list'], items: readonly T[]) =>
    items.filter((_, k) => !outside.some((place) => place.list === list && place.index === k));
  const { sections, moorings } = setup.output;
  return {
    ...setup,
    output: { ...setup.output, sections: kept('sections', sections), moorings: kept('moorings', moorings) },
  };
}

/** Where a check is told in the form: at the fields that its remedy writes, else at all that it is about. */
export function placesOf(check: Check): string[] {
  return check.remedy ? check.remedy.changes.map(({ pointer }) => pointer) : check.pointers;
}

/** "Seasonal strength 1.20" for one change, two joined by a comma, "4 changes from Strong" beyond; "Control" without a parent. */
export function proposeLabel(parent: ParentRun | null, changes: readonly SetupChange[]): string {
  if (!parent) return 'Control';
  if (changes.length === 0) return '';
  if (changes.length > 2) return `${changes.length} changes from ${parent.label}`.slice(0, 80);
  const words = changes.map(({ label, to, unit }) => [label, to, unit].filter(Boolean).join(' ')).join(', ');
  return (words.charAt(0).toUpperCase() + words.slice(1)).slice(0, 80);
}
