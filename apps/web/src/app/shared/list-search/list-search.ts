import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';
import { MatFormField, MatLabel, MatPrefix } from '@angular/material/form-field';
import { MatIcon } from '@angular/material/icon';
import { MatInput } from '@angular/material/input';

/** The search field over a list. What is typed goes out as it is typed; the list decides when it asks. */
@Component({
  selector: 'app-list-search',
  imports: [MatFormField, MatIcon, MatInput, MatLabel, MatPrefix],
  template: `
    <mat-form-field>
      <mat-label>{{ label() }}</mat-label>
      <mat-icon matPrefix svgIcon="search" />
      <input #words matInput type="search" autocomplete="off" maxlength="200" (input)="searched.emit(words.value)" />
    </mat-form-field>
  `,
  styles:
    ':host { display: block; max-width: 320px; } mat-icon { padding: 0 4px 0 10px; box-sizing: content-box; width: 18px; height: 18px; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class ListSearch {
  readonly label = input('Search');
  readonly searched = output<string>();
}
