import type { Setup } from '../setup';
import { FIELDS, NAMED_LISTS, patternOf } from './fields';
import { nameOf, type Member } from './pair-members';

/**
 * What a person calls the field at a JSON pointer into a setup (or into a request that holds one under `/setup`):
 * "Thickness at rest"; inside lists "Wind component 2, stress", or by name when the setup is given: "Halcyon shear,
 * stress". An unknown pointer gives the nearest field above it.
 */
export function fieldLabel(pointer: string, setup?: Setup): string {
  const inSetup = pointer === '/setup' ? '' : pointer.replace(/^\/setup\//, '/');
  const pattern = nearestField(patternOf(inSetup));
  const label = FIELDS[pattern].label;
  const list = Object.keys(NAMED_LISTS).find((start) => pattern.startsWith(`${start}/*`));
  if (list === undefined) return label;
  const position = Number(inSetup.slice(list.length + 1).split('/')[0]);
  const member = memberName(list, position, setup);
  return pattern === `${list}/*` ? member : `${member}, ${lowerFirst(label)}`;
}

/** Unit of the field at a JSON pointer; empty when it has none. */
export function fieldUnit(pointer: string): string {
  return FIELDS[nearestField(patternOf(pointer.replace(/^\/setup(?=\/|$)/, '')))].unit;
}

/** "Coast at the south edge" → "coast at the south edge"; names and symbols ("ρ0", "β") stay. */
export function lowerFirst(label: string): string {
  return /^(Coriolis|Rayleigh|Laplacian|Gaussian|Kelvin|Rossby)/.test(label)
    ? label
    : label.charAt(0).toLowerCase() + label.slice(1);
}

function nearestField(pattern: string): string {
  let at = pattern;
  while (!Object.hasOwn(FIELDS, at)) at = at.slice(0, Math.max(0, at.lastIndexOf('/')));
  return at;
}

function memberName(list: string, position: number, setup: Setup | undefined): string {
  const member = setup === undefined ? undefined : listOf(setup, list)[position];
  const name = member === undefined ? '' : nameOf(member);
  if (name) return list === '/basin/sponges' ? name.charAt(0).toUpperCase() + name.slice(1) : name;
  const word = NAMED_LISTS[list];
  return `${word.charAt(0).toUpperCase()}${word.slice(1)} ${position + 1}`;
}

function listOf(setup: Setup, list: string): readonly (Member | undefined)[] {
  switch (list) {
    case '/basin/islands':
      return setup.basin.islands;
    case '/basin/sponges':
      return setup.basin.sponges;
    case '/wind/components':
      return setup.wind.components;
    case '/friction/viscosityPatches':
      return setup.friction.viscosityPatches;
    case '/output/sections':
      return setup.output.sections;
    default:
      return setup.output.moorings;
  }
}
