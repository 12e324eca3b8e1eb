import { ChangeDetectionStrategy, Component } from '@angular/core';

@Component({
  selector: 'app-experiment-list',
  template: '<div class="page"><section class="band first"><div class="margin"><h1>Experiments</h1></div></section></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ExperimentList {}
