/** What the installation has sent and what was done in it. */
import { mailId } from '@shared/api/common';
import type { QueryOf, ResponseOf } from '@shared/api/contract';
import type { listAudit, listOutbox } from '@shared/api/people';
import type { Database } from '../../db/engine';
import type { MailRow, Post } from '../../mail';
import { auditPage } from './queries';

/** Letters are few; older ones are of no use, because the links in them expire. */
const outboxLength = 200;

/** A letter that went out has reached its reader: nobody else should find the link in it. */
const readable = (row: MailRow) => (row.state === 'sent' ? row.text.replace(/token=\S+/g, 'token=…') : row.text);

export type LabService = ReturnType<typeof createLabService>;

export function createLabService(db: Database, post: Post) {
  return {
    async outbox(): Promise<ResponseOf<typeof listOutbox>> {
      const rows = await post.latest(outboxLength);
      const mail = rows.map((row) => ({
        id: mailId.parse(row.id), to: row.recipient, subject: row.subject, text: readable(row), state: row.state, createdAt: row.createdAt.toISOString(),
      }));
      return { smtp: post.smtp, mail };
    },

    async audit({ before, limit }: QueryOf<typeof listAudit>): Promise<ResponseOf<typeof listAudit>> {
      const rows = await auditPage(db, before, limit);
      return { entries: rows.map(({ id, at, who, action, subject, detail }) => ({ id, at: at.toISOString(), who, action, subject, detail })) };
    },
  };
}
