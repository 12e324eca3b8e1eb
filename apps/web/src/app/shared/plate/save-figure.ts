import { DOCUMENT } from '@angular/common';
import { HttpClient } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import { firstValueFrom } from 'rxjs';
import { type BarModel, drawColourBar } from './colour-bar';
import { CAUTION, type PlotTable, csvFile } from './csv';
import { svg } from './overlay';
import { Palettes } from './palette';

const FONT = '"Inter Variable", Inter, sans-serif';
const FONT_FILES = [
  ['fonts/inter-latin-wght-normal.woff2', 'normal'],
  ['fonts/inter-latin-wght-italic.woff2', 'italic'],
] as const;
/** A saved bitmap has twice the pixels of the plot on screen: sharp on paper and on a projector. */
const PNG_SCALE = 2;

/** One panel of a saved figure; side by side has three. */
export interface SavedPanel {
  figure: SVGSVGElement;
  title: string;
  bar: BarModel | null;
}

export interface SavedFigure {
  /** File name without ending, and title at the top. */
  name: string;
  title: string;
  caption: string;
  panels: SavedPanel[];
}

/** Saves figures, always in the paper theme and with the caution, and their data. */
@Injectable({ providedIn: 'root' })
export class FigureSaver {
  private readonly document = inject(DOCUMENT);
  private readonly http = inject(HttpClient);
  private readonly palettes = inject(Palettes);
  private fonts: Promise<string> | null = null;

  async saveSvg(figure: SavedFigure): Promise<void> {
    const { element } = this.compose(figure, await this.fontFaces());
    this.download(`${figure.name}.svg`, new Blob([serialised(element)], { type: 'image/svg+xml' }));
  }

  async savePng(figure: SavedFigure): Promise<void> {
    const { element, width, height } = this.compose(figure, await this.fontFaces());
    const url = `data:image/svg+xml;charset=utf-8,${encodeURIComponent(serialised(element))}`;
    const image = new Image();
    image.src = url;
    await image.decode();
    const canvas = this.document.createElement('canvas');
    canvas.width = width * PNG_SCALE;
    canvas.height = height * PNG_SCALE;
    const context = canvas.getContext('2d');
    if (!context) throw new Error('This browser gives no canvas to draw the picture on.');
    context.drawImage(image, 0, 0, canvas.width, canvas.height);
    const blob = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, 'image/png'));
    if (!blob) throw new Error('The picture is too large for this browser; save it as SVG instead.');
    this.download(`${figure.name}.png`, blob);
  }

  saveCsv(name: string, table: PlotTable): void {
    // The mark in front tells spreadsheets that the text is UTF-8.
    this.download(`${name}.csv`, new Blob(['\ufeff', csvFile(table)], { type: 'text/csv;charset=utf-8' }));
  }

  /** Title above, panels beside each other with their colour bars, caption and caution below. */
  private compose(figure: SavedFigure, fontFaces: string): { element: SVGElement; width: number; height: number } {
    const palette = this.palettes.of('paper');
    const size = (panel: SavedPanel) => [
      Number(panel.figure.getAttribute('width')),
      Number(panel.figure.getAttribute('height')),
    ];
    const sizes = figure.panels.map(size);
    const width = sizes.reduce((sum, [w = 0]) => sum + w, 0) + 32;
    const tallest = Math.max(...sizes.map(([, h = 0]) => h));
    const hasTitles = figure.panels.length > 1;
    const top = 40 + (hasTitles ? 20 : 0);
    const barRoom = figure.panels.some((panel) => panel.bar) ? 38 : 0;
    const lines = [...wrapped(figure.caption, width - 32, 12), ...wrapped(CAUTION, width - 32, 10.5)];
    const captionLines = wrapped(figure.caption, width - 32, 12).length;
    const height = top + tallest + barRoom + lines.length * 16 + 20;
    const text = (x: number, y: number, font: string, colour: string, words: string) =>
      svg('text', { x, y, fill: colour, style: `font: ${font} ${FONT}` }, words);
    const root = svg('svg', { xmlns: 'http://www.w3.org/2000/svg', width, height, viewBox: `0 0 ${width} ${height}` });
    root.append(
      svg('style', {}, `${fontFaces} text { font-feature-settings: "tnum"; }`),
      svg('rect', { width, height, fill: palette.colour.sheet }),
      text(16, 26, '600 15px', palette.colour.text, figure.title),
    );
    let left = 16;
    figure.panels.forEach((panel, k) => {
      if (hasTitles) root.append(text(left + 8, top - 8, '600 13px', palette.colour.text, panel.title));
      panel.figure.setAttribute('x', String(left));
      panel.figure.setAttribute('y', String(top));
      root.append(panel.figure);
      const [w = 0, h = 0] = sizes[k] ?? [];
      if (panel.bar)
        drawColourBar(root, panel.bar, palette, left + 56, top + h + 6, Math.min(220, w * 0.55), `saved-bar-${k}`);
      left += w;
    });
    lines.forEach((line, k) => {
      const isCaution = k >= captionLines;
      const y = top + tallest + barRoom + 16 * (k + 1);
      root.append(text(16, y, isCaution ? '400 10.5px' : '400 12px', palette.colour['text-2'], line));
    });
    return { element: root, width, height };
  }

  /** Inter inside the file, so that the figure looks the same where the font is not installed. */
  private fontFaces(): Promise<string> {
    this.fonts ??= Promise.all(
      FONT_FILES.map(async ([file, style]) => {
        const buffer = await firstValueFrom(this.http.get(file, { responseType: 'arraybuffer' }));
        return `@font-face{font-family:"Inter Variable";font-style:${style};font-weight:100 900;src:url(data:font/woff2;base64,${base64(buffer)}) format("woff2")}`;
      }),
    ).then((faces) => faces.join(''));
    this.fonts.catch(() => (this.fonts = null));
    return this.fonts;
  }

  private download(name: string, blob: Blob): void {
    const url = URL.createObjectURL(blob);
    const link = this.document.createElement('a');
    link.href = url;
    link.download = name;
    link.click();
    setTimeout(() => URL.revokeObjectURL(url), 10_000);
  }
}

/** A name that is safe on every disk: letters, digits and hyphens. */
export function fileName(...parts: string[]): string {
  const name = parts
    .join(' ')
    .normalize('NFKD')
    .toLowerCase()
    .replace(/[^a-z0-9.]+/g, '-');
  return name.replace(/^[-.]+|[-.]+$/g, '').slice(0, 100) || 'plate';
}

/** Lines of at most `widthPx`, taking a letter as 0.52 of the size: text in SVG does not wrap by itself. */
export function wrapped(text: string, widthPx: number, sizePx: number): string[] {
  const most = Math.max(20, Math.floor(widthPx / (0.52 * sizePx)));
  const lines: string[] = [];
  for (const word of text.split(' ').filter(Boolean)) {
    const last = lines.at(-1);
    if (last !== undefined && last.length + 1 + word.length <= most) lines[lines.length - 1] = `${last} ${word}`;
    else lines.push(word);
  }
  return lines;
}

function serialised(element: SVGElement): string {
  return `<?xml version="1.0" encoding="UTF-8"?>\n${new XMLSerializer().serializeToString(element)}`;
}

function base64(buffer: ArrayBuffer): string {
  let text = '';
  const bytes = new Uint8Array(buffer);
  for (let k = 0; k < bytes.length; k += 8192) text += String.fromCharCode(...bytes.subarray(k, k + 8192));
  return btoa(text);
}
