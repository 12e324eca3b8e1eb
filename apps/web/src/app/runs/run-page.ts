import { ChangeDetectionStrategy, Component } from '@angular/core';

@Component({
  selector: 'app-run-page',
  template: '<div class="page"><section class="band first"><div class="margin"><h1>Run</h1></div></section></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RunPage {}
