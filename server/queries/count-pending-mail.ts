import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

/** Mails of the outbox that still have to go out. */
export async function countPendingMail(db: Database): Promise<number> {
  const { OutboxMail } = modelsOf(db.sequelize);
  return OutboxMail.count({ where: { state: ['pending', 'sending'] } });
}
