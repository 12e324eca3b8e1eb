import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { RouterLink } from '@angular/router';

/** An address that leads nowhere, or to what this person's roles do not open. */
@Component({
  selector: 'app-nowhere',
  imports: [RouterLink],
  template: `
    <div class="page">
      <section class="band first">
        <div class="margin">
          <h1>{{ reason() === 'role' ? 'Not yours to open' : 'Nothing at this address' }}</h1>
        </div>
        <p class="statement">
          @if (reason() === 'role') {
            This page is for admins. Ask one of them if you need it.
          } @else {
            The address may be mistyped, or what it named has been deleted.
          }
          <a routerLink="/">Back to the desk</a>.
        </p>
      </section>
    </div>
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Nowhere {
  readonly reason = input<'role' | 'address'>('address');
}
