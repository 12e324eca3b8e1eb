import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatPaginator, type PageEvent } from '@angular/material/paginator';
import { type Person, personSchema } from '@halfdeep/contracts';
import { firstValueFrom } from 'rxjs';
import { Api } from '../../core/api';
import { formatMoment } from '../../core/format';
import { PagedList } from '../../core/paged-list';
import { type ApiProblem, toApiProblem } from '../../core/problem';
import { Session } from '../../core/session';
import { Confirm } from '../../shared/confirm/confirm';
import { DataState } from '../../shared/data-state/data-state';
import { ListSearch } from '../../shared/list-search/list-search';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { InviteDialog } from './invite-dialog';
import { RolesDialog } from './roles-dialog';

/** Who may sign in, as what; invitations, roles, leaving and coming back. */
@Component({
  selector: 'app-people-page',
  imports: [DataState, ListSearch, MatButton, MatPaginator, ProblemMessage],
  templateUrl: './people-page.html',
  styleUrl: './people-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class PeoplePage {
  private readonly api = inject(Api);
  private readonly dialog = inject(MatDialog);
  private readonly confirm = inject(Confirm);
  protected readonly session = inject(Session);
  protected readonly people = new PagedList('/api/admin/people', personSchema);
  protected readonly refused = signal<ApiProblem | null>(null);
  /** What was done last, said politely. */
  protected readonly done = signal('');
  protected readonly busyWith = signal<string | null>(null);

  protected readonly seen = (person: Person) =>
    person.lastSeenAt === null ? 'never' : formatMoment(person.lastSeenAt);

  protected turn({ pageIndex, pageSize }: PageEvent): void {
    this.people.turnTo(pageIndex + 1, pageSize);
  }

  protected async invite(): Promise<void> {
    const invited = await firstValueFrom(
      this.dialog.open<InviteDialog, undefined, Person>(InviteDialog, { width: '440px' }).afterClosed(),
    );
    if (!invited) return;
    this.done.set(`${invited.name} is invited; the mail goes to ${invited.email}.`);
    this.people.again();
  }

  /** A new link by mail; the older one stops working. */
  protected async inviteAgain(person: Person): Promise<void> {
    const { email, name, roles } = person;
    await this.change(person, 'POST', { email, name, roles }, `A new invitation goes to ${email}.`);
  }

  protected async changeRoles(person: Person): Promise<void> {
    const changed = await firstValueFrom(
      this.dialog.open<RolesDialog, Person, Person>(RolesDialog, { data: person, width: '440px' }).afterClosed(),
    );
    if (!changed) return;
    this.people.replace(changed, (item) => item.id === changed.id);
    this.done.set(`${changed.name} is ${changed.roles.join(' and ')} now.`);
  }

  protected async deactivate(person: Person): Promise<void> {
    const sure = await this.confirm.ask({
      title: `Deactivate ${person.name}?`,
      text: 'Every session of theirs ends at once and they cannot sign in. Their experiments stay. They are told by mail.',
      yes: 'Deactivate',
      ends: true,
    });
    if (sure) await this.change(person, 'PATCH', { active: false }, `${person.name} is deactivated.`);
  }

  protected async withdraw(person: Person): Promise<void> {
    const sure = await this.confirm.ask({
      title: `Withdraw the invitation of ${person.name}?`,
      text: `The link that went to ${person.email} stops working. They can be invited again later.`,
      yes: 'Withdraw',
      ends: true,
    });
    if (sure) await this.change(person, 'PATCH', { active: false }, `The invitation of ${person.name} is withdrawn.`);
  }

  protected async reactivate(person: Person): Promise<void> {
    const as = person.roles.join(' and ');
    // Whoever was never here has no password yet.
    const invite = person.lastSeenAt === null;
    const sure = await this.confirm.ask({
      title: `Let ${person.name} in again?`,
      text: invite
        ? `If they have not accepted an invitation yet, a new one goes to ${person.email}; otherwise they can sign in as ${as}.`
        : `They can sign in again as ${as}, with the password they had.`,
      yes: 'Reactivate',
    });
    if (!sure) return;
    const changed = await this.change(person, 'PATCH', { active: true }, `${person.name} can sign in again.`);
    if (changed?.state === 'invited') this.done.set(`A new invitation goes to ${person.email}.`);
  }

  /** The person as changed; null when that was refused, or when nothing but a mail came of it. */
  private async change(person: Person, method: 'POST' | 'PATCH', body: object, done: string): Promise<Person | null> {
    let changed: Person | null = null;
    this.refused.set(null);
    this.busyWith.set(person.id);
    try {
      if (method === 'POST') await firstValueFrom(this.api.send('POST', '/api/admin/people', body));
      else {
        const answer = await firstValueFrom(this.api.patch(`/api/admin/people/${person.id}`, body, personSchema));
        this.people.replace(answer, (item) => item.id === answer.id);
        changed = answer;
      }
      this.done.set(done);
    } catch (error) {
      this.refused.set(toApiProblem(error));
    } finally {
      this.busyWith.set(null);
    }
    return changed;
  }
}
