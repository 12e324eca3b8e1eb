import { DOCUMENT } from '@angular/common';
import { Injectable, inject } from '@angular/core';

/** The few traces and layout keys that plates use, typed; the library's own types bring far more than is needed. */
export interface HeatmapTrace {
  type: 'heatmap';
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  /** Rows, south to north or early to late. */
  z: readonly ArrayLike<number>[];
  zsmooth: 'fast' | false;
  zmin: number;
  zmax: number;
  colorscale: [number, string][];
  showscale: false;
  hoverinfo: 'skip';
}
export interface CurveTrace {
  type: 'scatter';
  mode: 'lines';
  x: ArrayLike<number>;
  y: ArrayLike<number>;
  line: { color: string; width: number; dash: string };
  hoverinfo: 'skip';
  connectgaps: false;
}
export interface PlotAxis {
  range: [number, number];
  tickvals: number[];
  ticktext: string[];
  [key: string]: unknown;
}
export interface PlotLayout {
  width: number;
  height: number;
  margin: { l: number; r: number; t: number; b: number };
  xaxis: PlotAxis;
  yaxis: PlotAxis;
  [key: string]: unknown;
}
export type PlotTrace = HeatmapTrace | CurveTrace;

export interface PlotlyStatic {
  react(element: HTMLElement, data: PlotTrace[], layout: PlotLayout, config: object): Promise<unknown>;
  purge(element: HTMLElement): void;
  toImage(
    figure: { data: PlotTrace[]; layout: PlotLayout; config: object },
    options: { format: 'svg'; width: number; height: number },
  ): Promise<string>;
}

declare global {
  interface Window {
    Plotly?: PlotlyStatic;
  }
}

export const PLOT_CONFIG = { staticPlot: true, displayModeBar: false, responsive: false } as const;

/** Brings the plotting library, once, when the first plate asks for it. */
@Injectable({ providedIn: 'root' })
export class PlotlyLoader {
  private readonly document = inject(DOCUMENT);
  private loading: Promise<PlotlyStatic> | null = null;

  /** The library. Rejects with a sentence when it cannot be fetched; the next call tries again. */
  load(): Promise<PlotlyStatic> {
    this.loading ??= this.fetch().catch((error: unknown) => {
      this.loading = null;
      throw error;
    });
    return this.loading;
  }

  private fetch(): Promise<PlotlyStatic> {
    const present = this.document.defaultView?.Plotly;
    if (present) return Promise.resolve(present);
    return new Promise((resolve, reject) => {
      const script = this.document.createElement('script');
      script.src = 'vendor/plotly.min.js';
      script.onload = () => {
        const plotly = this.document.defaultView?.Plotly;
        if (plotly) resolve(plotly);
        else reject(new Error('The plotting library arrived, but is not what it should be.'));
      };
      script.onerror = () => {
        script.remove();
        reject(new Error('The plotting library could not be fetched from this server. Try again.'));
      };
      this.document.head.append(script);
    });
  }
}
