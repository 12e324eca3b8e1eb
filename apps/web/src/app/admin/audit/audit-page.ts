import { ChangeDetectionStrategy, Component } from '@angular/core';
import { MatPaginator, type PageEvent } from '@angular/material/paginator';
import { auditEntrySchema } from '@halfdeep/contracts';
import { formatTimestamp } from '../../core/format';
import { PagedList } from '../../core/paged-list';
import { DataState } from '../../shared/data-state/data-state';
import { ListSearch } from '../../shared/list-search/list-search';
import { ProblemMessage } from '../../shared/problem-message/problem-message';

/** What happened, who did it, from where; newest first. */
@Component({
  selector: 'app-audit-page',
  imports: [DataState, ListSearch, MatPaginator, ProblemMessage],
  templateUrl: './audit-page.html',
  styles: '.title { margin-bottom: 18px; } app-list-search { margin-bottom: 12px; }',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class AuditPage {
  protected readonly audit = new PagedList('/api/admin/audit', auditEntrySchema);
  protected readonly at = formatTimestamp;

  protected turn({ pageIndex, pageSize }: PageEvent): void {
    this.audit.turnTo(pageIndex + 1, pageSize);
  }
}
