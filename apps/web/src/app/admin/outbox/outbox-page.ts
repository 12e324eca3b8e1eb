import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { MatButton } from '@angular/material/button';
import { MatDialog } from '@angular/material/dialog';
import { MatPaginator, type PageEvent } from '@angular/material/paginator';
import { type OutboxMail, outboxMailSchema } from '@halfdeep/contracts';
import { formatMoment } from '../../core/format';
import { PagedList } from '../../core/paged-list';
import { DataState } from '../../shared/data-state/data-state';
import { ListSearch } from '../../shared/list-search/list-search';
import { ProblemMessage } from '../../shared/problem-message/problem-message';
import { MailDialog } from './mail-dialog';

/** The mails that left or wait: to whom, about what, how it went. */
@Component({
  selector: 'app-outbox-page',
  imports: [DataState, ListSearch, MatButton, MatPaginator, ProblemMessage],
  templateUrl: './outbox-page.html',
  styles: `
    .title {
      margin-bottom: 18px;
    }
    app-list-search {
      margin-bottom: 12px;
    }
    .failed {
      color: var(--hd-refuse);
    }
    @media screen and (max-width: 760px) {
      tbody th {
        min-width: 150px;
        white-space: normal;
        overflow-wrap: anywhere;
      }
      .words {
        min-width: 110px;
      }
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class OutboxPage {
  private readonly dialog = inject(MatDialog);
  protected readonly outbox = new PagedList('/api/admin/outbox', outboxMailSchema);
  protected readonly at = (iso: string) => formatMoment(iso);
  protected readonly tries = ({ attempts }: OutboxMail) => (attempts === 1 ? 'one try' : `${attempts} tries`);

  protected turn({ pageIndex, pageSize }: PageEvent): void {
    this.outbox.turnTo(pageIndex + 1, pageSize);
  }

  protected read(mail: OutboxMail): void {
    this.dialog.open(MailDialog, { data: mail, width: '560px' });
  }
}
