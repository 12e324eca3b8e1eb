import { inject, provideEnvironmentInitializer } from '@angular/core';
import { MatIconRegistry } from '@angular/material/icon';
import { DomSanitizer } from '@angular/platform-browser';
import arrowDown from '@material-symbols/svg-400/outlined/arrow_downward.svg';
import arrowUp from '@material-symbols/svg-400/outlined/arrow_upward.svg';
import drag from '@material-symbols/svg-400/outlined/drag_indicator.svg';
import search from '@material-symbols/svg-400/outlined/search.svg';

const ICONS = { 'arrow-up': arrowUp, 'arrow-down': arrowDown, drag, search };

/** Registers the few icons in use; they are inlined in the bundle, nothing is fetched. */
export const provideIcons = () =>
  provideEnvironmentInitializer(() => {
    const [registry, sanitizer] = [inject(MatIconRegistry), inject(DomSanitizer)];
    // The text comes from our own build, never from a person.
    for (const [name, svg] of Object.entries(ICONS))
      registry.addSvgIconLiteral(name, sanitizer.bypassSecurityTrustHtml(svg));
  });
