import { DestroyRef, ElementRef, inject, signal, type Signal } from '@angular/core';

/** Width of the component's own element in CSS px, kept up to date; `first` until it is known. Call while constructing. */
export function elementWidth(first: number): Signal<number> {
  const element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  const width = signal(first);
  if (typeof ResizeObserver === 'undefined') return width.asReadonly();
  const observer = new ResizeObserver((entries) => {
    const measured = entries.at(-1)?.contentRect.width ?? 0;
    if (measured > 0) width.set(Math.round(measured));
  });
  observer.observe(element);
  inject(DestroyRef).onDestroy(() => observer.disconnect());
  return width.asReadonly();
}
