import { ChangeDetectionStrategy, Component } from '@angular/core';

@Component({
  selector: 'app-desk',
  template: '<div class="page"><section class="band first"><div class="margin"><h1>Desk</h1></div></section></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class Desk {}
