import { ChangeDetectionStrategy, Component } from '@angular/core';

@Component({
  selector: 'app-experiment-page',
  template: '<div class="page"><section class="band first"><div class="margin"><h1>Experiment</h1></div></section></div>',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ExperimentPage {}
