import { Op } from 'sequelize';
import { z } from 'zod';
import type { OutboxState } from '../contract/alerts.js';
import { pageFrom, readCursor } from '../lib/cursor.js';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';
import type { MailRecord } from '../presenters/mail.js';

const cursorSchema = z.object({ id: z.int() });

/** A page of the outbox, newest first, with every try. Three queries. */
export async function listMail(
  db: Database,
  page: { state?: OutboxState | undefined; limit: number; cursor?: string | undefined },
): Promise<{ mails: MailRecord[]; next: string | null }> {
  const { MailAttempt, OutboxMail, Watch } = modelsOf(db.sequelize);
  const after = readCursor(page.cursor, cursorSchema);
  const found = await OutboxMail.findAll({
    where: {
      ...(page.state ? { state: page.state } : {}),
      ...(after ? { id: { [Op.lt]: after.id } } : {}),
    },
    order: [['id', 'DESC']],
    limit: page.limit + 1,
  });
  const { rows, next } = pageFrom(found, page.limit, ({ id }) => ({ id }));
  const [attempts, watches] = await Promise.all([
    MailAttempt.findAll({
      where: { outboxId: rows.map((mail) => mail.id) },
      order: ['outboxId', 'number'],
    }),
    Watch.findAll({ where: { id: rows.map((mail) => mail.watchId) }, attributes: ['id', 'name'] }),
  ]);
  const names = new Map(watches.map(({ id, name }) => [id, name] as const));
  const mails = rows.map((mail) => ({
    mail,
    watchName: names.get(mail.watchId) ?? '',
    attempts: attempts.filter((attempt) => attempt.outboxId === mail.id),
  }));
  return { mails, next };
}
