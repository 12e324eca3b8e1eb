import * as z from 'zod';
import { LIMITS, type LimitName } from '@halfdeep/ocean';

// Parts of the setup schema whose messages say what is wrong, what arrived and what would be right.

/** What arrived, as a person reads it; an empty field arrives as null. */
export function arrived(input: unknown): string {
  if (input === undefined || input === null) return 'nothing';
  if (Number.isNaN(input)) return 'no number';
  if (typeof input === 'number') return spoken(input);
  const text = JSON.stringify(input) ?? typeof input;
  return text.length > 60 ? `${text.slice(0, 60)}…` : text;
}

/** A number with a true minus sign, and narrow no-break spaces between thousands from 10 000. */
function spoken(value: number): string {
  const [whole = '', ...rest] = String(value).split(/(?=[.e])/);
  const grouped = /^-?\d{5,}$/.test(whole) ? whole.replace(/\B(?=(\d{3})+$)/g, '\u202f') : whole;
  return [grouped, ...rest].join('').replace(/-/g, '−');
}

/** A number inside a hard limit of `LIMITS`, or a narrower range. */
export function quantity(name: LimitName, range: { min?: number; max?: number } = {}) {
  const limit: (typeof LIMITS)[LimitName] & { multipleOf?: number } = LIMITS[name];
  const min = range.min ?? limit.min;
  const max = range.max ?? limit.max;
  const unit = limit.unit ? ` ${limit.unit}` : '';
  const error = (issue: { input?: unknown }) =>
    `${limit.label} must be between ${spoken(min)} and ${spoken(max)}${unit}; ${arrived(issue.input)} arrived.`;
  const base = z.number({ error }).min(min, { error }).max(max, { error });
  const step = limit.multipleOf;
  if (step === undefined) return base;
  return base.multipleOf(step, {
    error: (issue) =>
      `${limit.label} must be ${step === 1 ? 'a whole number' : `a multiple of ${step}${unit === ' d' ? unit : ''}`}; ${arrived(issue.input)} arrived.`,
  });
}

/** One of a few words. */
export function choice<const T extends readonly [string, ...string[]]>(what: string, values: T) {
  return z.enum(values, { error: (issue) => mustBeOneOf(what, values, issue.input) });
}

/** Error of a union told apart by `kind`. */
export function kindError(what: string, kinds: readonly string[]) {
  return (issue: { input?: unknown }) => {
    const { input } = issue;
    const kind = typeof input === 'object' && input !== null && 'kind' in input ? input.kind : undefined;
    return mustBeOneOf(`The kind of ${what}`, kinds, kind);
  };
}

function mustBeOneOf(what: string, values: readonly string[], input: unknown): string {
  return `${what} must be one of ${values.join(', ')}; ${arrived(input)} arrived.`;
}

/** An object of exactly these fields. */
export function fields<T extends z.core.$ZodLooseShape>(what: string, shape: T) {
  return z.strictObject(shape, {
    error: (issue) =>
      issue.code === 'unrecognized_keys'
        ? `${what} has no field ${issue.keys.map((key) => `“${key}”`).join(', ')}; it has ${Object.keys(shape).join(', ')}.`
        : `${what} must be an object with ${Object.keys(shape).join(', ')}; ${arrived(issue.input)} arrived.`,
  });
}

/** A list of at most so many. */
export function list<T extends z.ZodType>(what: string, item: T, max: number) {
  return z.array(item, { error: (issue) => `${what} must be a list; ${arrived(issue.input)} arrived.` }).max(max, {
    error: (issue) =>
      `At most ${max} ${what.toLowerCase()}; ${Array.isArray(issue.input) ? issue.input.length : arrived(issue.input)} arrived.`,
  });
}

/** A name; `required` refuses an empty one with that sentence. */
export function name(required?: string) {
  const text = z
    .string({ error: (issue) => `A name must be text; ${arrived(issue.input)} arrived.` })
    .trim()
    .max(60, 'A name has at most 60 characters.');
  return required === undefined ? text : text.min(1, required);
}

/** Yes or no. */
export function yesOrNo(what: string) {
  return z.boolean({ error: (issue) => `${what} must be true or false; ${arrived(issue.input)} arrived.` });
}
