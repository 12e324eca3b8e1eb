import type { SetupChange } from '../preflight-types';
import type { Setup } from '../setup';
import { fieldLabel, fieldUnit, lowerFirst } from './field-label';
import { FIELDS, NAMED_LISTS, patternOf } from './fields';
import { readablePair } from './numbers';
import { nameOf, pairMembers, type Member } from './pair-members';
import * as summaries from './summaries';

type JsonObject = Record<string, unknown>;

/**
 * What changes from setup `a` to setup `b`, field by field, in the order of the form. Members of lists (wind components,
 * islands, sponges, sections, moorings …) are matched by name, so that moving one in its list changes nothing but the order.
 * Empty when the two say the same. Pointers lead into `b`; those of something left out lead to the list that it was in.
 */
export function diffSetups(a: Setup, b: Setup): SetupChange[] {
  const changes: SetupChange[] = [];
  diffValues(a, b, '', '', changes);
  return changes;
}

function diffValues(a: unknown, b: unknown, pointer: string, prefix: string, out: SetupChange[]): void {
  if (same(a, b)) return;
  if (pointer in NAMED_LISTS) {
    diffList(a as Member[], b as Member[], pointer, out);
  } else if (isObject(a) && isObject(b)) {
    if (a['kind'] !== b['kind']) {
      out.push({ ...label(pointer, prefix), from: summary(a, pointer), to: summary(b, pointer), unit: '' });
      // A wave, a bump and a step share nothing but their name; an island keeps its name whatever its shape.
      if ('name' in a && 'name' in b) diffValues(a['name'], b['name'], `${pointer}/name`, prefix, out);
      return;
    }
    for (const key of Object.keys(b)) diffValues(a[key] ?? null, b[key], `${pointer}/${key}`, prefix, out);
  } else {
    const [from, to] = valueTexts(a, b, pointer);
    const numbers = typeof a === 'number' || typeof b === 'number';
    out.push({ ...label(pointer, prefix), from, to, unit: numbers ? fieldUnit(pointer) : '' });
  }
}

function diffList(a: Member[], b: Member[], pointer: string, out: SetupChange[]): void {
  const pairs = pairMembers(a, b);
  const noun = NAMED_LISTS[pointer];
  for (const [i, j] of pairs) {
    const name = nameOf(b[j]) || nameOf(a[i]) || `${noun} ${j + 1}`;
    diffValues(a[i], b[j], `${pointer}/${j}`, `${name}, `, out);
  }
  const kept = new Set(pairs.map(([, j]) => j));
  const stayed = new Set(pairs.map(([i]) => i));
  a.forEach((member, i) => {
    if (!stayed.has(i)) out.push(existence(pointer, member, i, noun, memberSummary(member, pointer), 'none'));
  });
  b.forEach((member, j) => {
    if (!kept.has(j)) out.push(existence(`${pointer}/${j}`, member, j, noun, 'none', memberSummary(member, pointer)));
  });
  // Sums of stresses depend on their order in the last bit, and columns of records follow it.
  if (pairs.some(([i], k) => k > 0 && i < pairs[k - 1][0])) {
    const names = (list: Member[], indices: number[]) =>
      indices.map((k) => nameOf(list[k]) || `${noun} ${k + 1}`).join(', ');
    out.push({
      pointer,
      label: `order of the ${plural(noun)}`,
      from: names(
        a,
        pairs.map(([i]) => i).sort((x, y) => x - y),
      ),
      to: names(
        b,
        pairs.map(([, j]) => j),
      ),
      unit: '',
    });
  }
}

function existence(
  pointer: string,
  member: Member,
  index: number,
  noun: string,
  from: string,
  to: string,
): SetupChange {
  const label = member.edge === undefined ? `${noun} ${member.name || index + 1}` : nameOf(member);
  return { pointer, label, from, to, unit: '' };
}

function plural(noun: string): string {
  return noun.startsWith('place ') ? noun.replace('place', 'places') : `${noun}s`;
}

function label(pointer: string, prefix: string): { pointer: string; label: string } {
  const field = FIELDS[patternOf(pointer)]?.label ?? fieldLabel(pointer);
  return { pointer, label: `${prefix}${lowerFirst(field)}` };
}

function valueTexts(a: unknown, b: unknown, pointer: string): [string, string] {
  const words = FIELDS[patternOf(pointer)];
  if (typeof a === 'number' && typeof b === 'number') return readablePair(a, b, words?.decimals);
  if (Array.isArray(a) && Array.isArray(b)) return pointTexts(a, b);
  const text = (value: unknown): string => {
    if (value === null) return words?.whenNull ?? 'none';
    if (typeof value === 'number') return readablePair(value, value, words?.decimals)[0];
    if (isObject(value)) return summary(value, pointer);
    if (typeof value !== 'string' && typeof value !== 'boolean') return JSON.stringify(value);
    return words?.values?.[String(value)] ?? (value === '' ? 'no name' : String(value));
  };
  return [text(a), text(b)];
}

/** Rings of a polygon: their sizes when those differ, else the first point that moved and how many more did. */
function pointTexts(a: unknown[], b: unknown[]): [string, string] {
  if (a.length !== b.length) return [`${a.length} points`, `${b.length} points`];
  const moved = a.flatMap((point, k) => (same(point, b[k]) ? [] : [k]));
  const more = moved.length > 1 ? ` and ${moved.length - 1} more` : '';
  const [p, q] = [a[moved[0]], b[moved[0]]] as [number, number][];
  const [x, y] = [readablePair(p[0], q[0]), readablePair(p[1], q[1])];
  return [`${x[0]}° E ${y[0]}° N`, `${x[1]}° E ${y[1]}° N${more}`];
}

function summary(value: JsonObject, pointer: string): string {
  const pattern = patternOf(pointer);
  if (pattern === '/wind/components/*/pattern') return summaries.patternSummary(value as never);
  if (pattern === '/basin/westernCoast') return summaries.coastSummary(value as never);
  if (pattern === '/start') return summaries.startSummary(value as never);
  if (pattern === '/layer/entrainment') return summaries.entrainmentSummary(value as never);
  if (pattern === '/basin/coastSpacing') return summaries.coastSpacingSummary(value as never);
  return memberSummary(value, pattern.replace(/\/\*$/, ''));
}

function memberSummary(member: Member, list: string): string {
  if (list === '/wind/components') return summaries.componentSummary(member as never);
  if (list === '/basin/islands') return summaries.islandSummary(member as never);
  if (list === '/basin/sponges') return summaries.spongeSummary(member as never);
  if (list === '/friction/viscosityPatches') return summaries.viscosityPatchSummary(member as never);
  return list === '/output/sections'
    ? summaries.sectionSummary(member as never)
    : summaries.mooringSummary(member as never);
}

function isObject(value: unknown): value is JsonObject {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

/** Equal as data, whatever the order of keys. */
function same(a: unknown, b: unknown): boolean {
  if (a === b || (a !== a && b !== b)) return true;
  if (Array.isArray(a) && Array.isArray(b)) return a.length === b.length && a.every((item, k) => same(item, b[k]));
  if (!isObject(a) || !isObject(b)) return false;
  const keys = Object.keys(a);
  return keys.length === Object.keys(b).length && keys.every((key) => key in b && same(a[key], b[key]));
}
