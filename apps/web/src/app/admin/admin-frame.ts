import { ChangeDetectionStrategy, Component } from '@angular/core';
import { RouterLink, RouterLinkActive, RouterOutlet } from '@angular/router';

/** Keeping house: its parts in the margin, the part in view in the field. */
@Component({
  selector: 'app-admin-frame',
  imports: [RouterLink, RouterLinkActive, RouterOutlet],
  template: `
    <div class="page">
      <div class="band first">
        <div class="margin">
          <h1>Admin</h1>
          <nav class="contents" aria-label="Admin">
            @for (part of parts; track part.link) {
              <a [routerLink]="part.link" routerLinkActive="here" ariaCurrentWhenActive="page">{{ part.name }}</a>
            }
          </nav>
        </div>
        <div class="field"><router-outlet /></div>
      </div>
    </div>
  `,
  styles: `
    @media screen and (max-width: 760px) {
      .contents {
        display: flex;
        overflow-x: auto;
        border-left: 0;
        margin-top: 0;
        width: 100%;
      }
      .contents a {
        border-left: 0;
        border-bottom: 3px solid transparent;
        padding: 4px 0;
        margin: 0 14px 0 0;
        white-space: nowrap;
      }
      .contents a[aria-current] {
        border-bottom-color: var(--hd-text);
      }
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AdminFrame {
  protected readonly parts = [
    { name: 'Queue', link: 'queue' },
    { name: 'Workers', link: 'workers' },
    { name: 'People', link: 'people' },
    { name: 'Outbox', link: 'outbox' },
    { name: 'Audit trail', link: 'audit' },
  ];
}
