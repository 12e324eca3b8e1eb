import { type AuditEntry, type Page, type PageQuery } from '@halfdeep/contracts';
import { AuditRow } from '@halfdeep/store';
import { type Transaction } from 'sequelize';
import { containing } from '../http/list';
import { type Actor } from '../policy/actor';

/** What happened, for the record. */
export interface AuditNote {
  /** Null or no actor in it: the system itself, or somebody who is not signed in. */
  by: { actor: Pick<Actor, 'id' | 'name'> | null; address: string } | null;
  /** In the past tense: "changed roles", "lowered the cap". */
  action: string;
  /** To what: a person's address, a run's label. */
  subject: string;
  detail?: string;
}

/** The audit trail: written in the transaction of what it records, so that neither is there without the other. */
export class AuditTrail {
  constructor(private readonly now: () => Date = () => new Date()) {}

  async record({ by, action, subject, detail = '' }: AuditNote, transaction: Transaction): Promise<void> {
    const actor = by?.actor ?? null;
    await AuditRow.create(
      {
        at: this.now(),
        actorId: actor?.id ?? null,
        actorName: actor?.name ?? null,
        action,
        subject,
        detail,
        address: by?.address ?? null,
      },
      { transaction },
    );
  }

  /** Newest first; `q` searches who, what, to what and the detail. */
  async list({ page, pageSize, q }: PageQuery): Promise<Page<AuditEntry>> {
    const { rows, count } = await AuditRow.findAndCountAll({
      where: q ? containing(q, ['actor_name', 'action', 'subject', 'detail', 'address']) : {},
      order: [['id', 'DESC']],
      limit: pageSize,
      offset: (page - 1) * pageSize,
    });
    return { items: rows.map(toEntry), page, pageSize, total: count };
  }
}

function toEntry({ id, at, actorId, actorName, action, subject, detail, address }: AuditRow): AuditEntry {
  const actor = actorId === null ? null : { id: actorId, name: actorName ?? '' };
  return { id, at: at.toISOString(), actor, action, subject, detail, address };
}
