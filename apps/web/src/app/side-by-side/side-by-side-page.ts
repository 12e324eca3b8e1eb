import { ChangeDetectionStrategy, Component } from '@angular/core';

@Component({
  selector: 'app-side-by-side-page',
  template: '<div class="page"><section class="band first"><div class="margin"><h1>Side by side</h1></div></section></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SideBySidePage {}
