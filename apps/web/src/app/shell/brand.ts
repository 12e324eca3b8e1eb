import { ChangeDetectionStrategy, Component } from '@angular/core';

/** A sheet, the warm layer inked, the deep one left as paper with two soundings. */
@Component({
  selector: 'app-brand',
  template: `
    <svg viewBox="0 0 22 22" width="22" height="22" aria-hidden="true" focusable="false">
      <rect class="sheet" x=".75" y=".75" width="20.5" height="20.5" />
      <path class="ink" d="M1 5q5 4 10 4t10-4v6H1z" />
      <path class="line" d="M5 15h12M8 18h6" />
    </svg>
    <span>Halfdeep</span>
  `,
  styles: `
    :host {
      display: inline-flex;
      align-items: center;
      gap: 10px;
      font: 600 16px/20px var(--hd-font);
      letter-spacing: -0.01em;
    }
    .sheet {
      fill: var(--hd-sheet);
      stroke: var(--hd-text);
      stroke-width: 1.5;
    }
    .ink {
      fill: var(--hd-text);
    }
    .line {
      stroke: var(--hd-text);
      stroke-width: 1.5;
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Brand {}
