import { Injectable, inject } from '@angular/core';
import { Title } from '@angular/platform-browser';
import { type RouterStateSnapshot, TitleStrategy } from '@angular/router';

/** "Desk · Halfdeep". A screen that knows its name only later calls `set`. */
@Injectable({ providedIn: 'root' })
export class PageTitle extends TitleStrategy {
  private readonly title = inject(Title);

  override updateTitle(snapshot: RouterStateSnapshot): void {
    this.set(this.buildTitle(snapshot));
  }

  set(name: string | undefined): void {
    this.title.setTitle(name ? `${name} · Halfdeep` : 'Halfdeep');
  }
}
