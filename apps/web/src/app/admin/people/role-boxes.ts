import { ChangeDetectionStrategy, Component, input, model } from '@angular/core';
import { MatCheckbox } from '@angular/material/checkbox';
import { ROLES, type Role } from '@halfdeep/contracts';

const ABOUT: Record<Role, string> = {
  modeller: 'owns experiments: sets up, queues, stops, resumes and extends runs',
  reviewer: 'reads every experiment and compares any two runs',
  admin: 'keeps the queue, the people and the machine',
};

/** The roles as boxes to tick; one line each says what it allows. */
@Component({
  selector: 'app-role-boxes',
  imports: [MatCheckbox],
  template: `
    <fieldset [attr.aria-describedby]="message() ? 'roles-message' : null">
      <legend class="small quiet">Roles</legend>
      @for (role of all; track role) {
        <mat-checkbox [checked]="roles().includes(role)" (change)="toggle(role, $event.checked)">
          {{ role }} <span class="note quiet">{{ about[role] }}</span>
        </mat-checkbox>
      }
      @if (message()) {
        <p id="roles-message" class="note bad" role="alert">{{ message() }}</p>
      }
    </fieldset>
  `,
  styles: `
    fieldset {
      border: 0;
      margin: 0;
      padding: 0;
      display: grid;
    }
    .bad {
      color: var(--hd-refuse);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class RoleBoxes {
  readonly roles = model.required<readonly Role[]>();
  readonly message = input('');
  protected readonly all = ROLES;
  protected readonly about = ABOUT;

  protected toggle(role: Role, on: boolean): void {
    // In the order of the trade, whichever was ticked first.
    this.roles.update((roles) => ROLES.filter((item) => (item === role ? on : roles.includes(item))));
  }
}
