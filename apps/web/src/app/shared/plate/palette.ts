import { DOCUMENT } from '@angular/common';
import { Injectable, inject } from '@angular/core';
import { Ground } from '../../core/ground';

export type Theme = 'paper' | 'ink';

const COLOURS = [
  'text',
  'text-2',
  'text-3',
  'outline',
  'hair',
  'sheet',
  'ground',
  'wash',
  'live',
  'refuse',
  'land',
  'land-line',
  'series-1',
  'series-2',
  'series-3',
  'series-4',
  'series-5',
] as const;
export type ColourName = (typeof COLOURS)[number];

/** Colours of one theme as the browser resolves them, and the two data scales as lists of stops. */
export interface Palette {
  theme: Theme;
  colour: Record<ColourName, string>;
  diverging: string[];
  sequential: string[];
}

export const DIVERGING_STOPS = 17;
export const SEQUENTIAL_STOPS = 13;

/** Stops at equal distances from 0 to 1, as the plotting library wants them. Throws RangeError below two stops. */
export function colourScale(stops: readonly string[]): [number, string][] {
  if (stops.length < 2) throw new RangeError(`A colour scale has at least two stops; ${stops.length} arrived.`);
  return stops.map((stop, k) => [k / (stops.length - 1), stop]);
}

/** Red, green, blue of a resolved colour, 0–255: "#1868a0", "rgb(24, 104, 160)". NaNs when it is neither. */
export function channels(colour: string): [number, number, number] {
  if (/^#[0-9a-f]{6}$/i.test(colour)) {
    const n = Number.parseInt(colour.slice(1), 16);
    return [n >> 16, (n >> 8) & 255, n & 255];
  }
  const found = /^rgba?\(([^)]*)\)$/.exec(colour)?.[1]?.match(/[\d.]+/g) ?? [];
  return [Number(found[0] ?? NaN), Number(found[1] ?? NaN), Number(found[2] ?? NaN)];
}

/** 256 colours between the stops, linear in each channel: [256 × 3], for drawing on a canvas. */
export function colourTable(stops: readonly string[]): Uint8ClampedArray {
  const rgb = stops.map(channels);
  const table = new Uint8ClampedArray(256 * 3);
  for (let k = 0; k < 256; k++) {
    const at = (k / 255) * (rgb.length - 1);
    const below = Math.min(rgb.length - 2, Math.floor(at));
    for (let c = 0; c < 3; c++) {
      const a = rgb[below]?.[c] ?? 0;
      const b = rgb[below + 1]?.[c] ?? 0;
      table[3 * k + c] = a + (b - a) * (at - below);
    }
  }
  return table;
}

/** Reads the tokens of either theme, whichever is on screen: saved plates are always in paper. */
@Injectable({ providedIn: 'root' })
export class Palettes {
  private readonly document = inject(DOCUMENT);
  private readonly cache = new Map<Theme, Palette>();
  /** What is on screen now. */
  readonly theme = inject(Ground).name;

  of(theme: Theme): Palette {
    const held = this.cache.get(theme);
    if (held) return held;
    const probe = this.document.createElement('i');
    probe.hidden = true;
    probe.style.colorScheme = theme === 'paper' ? 'light' : 'dark';
    this.document.body.append(probe);
    const read = (name: string): string => {
      probe.style.color = `var(--hd-${name})`;
      return getComputedStyle(probe).color;
    };
    const list = (name: string, length: number) => Array.from({ length }, (_, k) => read(`${name}-${k}`));
    const palette: Palette = {
      theme,
      colour: Object.fromEntries(COLOURS.map((name) => [name, read(name)])) as Record<ColourName, string>,
      diverging: list('div', DIVERGING_STOPS),
      sequential: list('seq', SEQUENTIAL_STOPS),
    };
    probe.remove();
    this.cache.set(theme, palette);
    return palette;
  }
}
