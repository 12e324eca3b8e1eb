import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { Router } from '@angular/router';

/** The server did not say who this is: what it answered, and a way to ask again. */
@Component({
  selector: 'app-unreachable',
  imports: [MatButton],
  template: `
    <div class="page">
      <section class="band first">
        <div class="margin"><h1>No answer</h1></div>
        <div class="field" role="alert">
          <p class="statement">{{ reason }}</p>
          <p class="small quiet">Runs go on computing while this page is away; nothing is lost.</p>
          <p class="again"><button mat-flat-button type="button" (click)="again()">Try again</button></p>
        </div>
      </section>
    </div>
  `,
  styles: '.again { margin-top: 16px; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Unreachable {
  private readonly router = inject(Router);
  private readonly state = this.router.currentNavigation()?.extras.state ?? {};
  protected readonly reason = typeof this.state['problem'] === 'string' ? this.state['problem'] : 'No answer arrived.';

  protected again(): void {
    const url: unknown = this.state['url'];
    void this.router.navigateByUrl(typeof url === 'string' ? url : '/', { onSameUrlNavigation: 'reload' });
  }
}
