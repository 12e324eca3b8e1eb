import { ChangeDetectionStrategy, Component, type ElementRef, inject, viewChild } from '@angular/core';
import { MatTabNavPanel } from '@angular/material/tabs';
import { RouterOutlet } from '@angular/router';
import { Session } from './core/session';
import { Head } from './shell/head';

/** The frame of every page: skip link, head, content. */
@Component({
  selector: 'app-root',
  imports: [Head, MatTabNavPanel, RouterOutlet],
  templateUrl: './app.html',
  styleUrl: './app.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class App {
  protected readonly session = inject(Session);
  private readonly content = viewChild.required<ElementRef<HTMLElement>>('content');

  /** The address stays as it is: with a base address a bare fragment would lead to the desk. */
  protected skip(event: Event): void {
    event.preventDefault();
    this.content().nativeElement.focus();
  }
}
