import type { Database } from '../lib/database.js';
import type { ClaimedMail } from './claim-mail.js';

/** Gives a mail up for good without sending it; `reason` is for the administrator. */
export async function declineMail(
  db: Database,
  { id, epoch }: ClaimedMail,
  reason: string,
): Promise<void> {
  await db.pool.query(
    `UPDATE outbox SET state = 'declined', reason = ?, claim_expires_at = NULL
      WHERE id = ? AND epoch = ? AND state = 'sending'`,
    [reason, id, epoch],
  );
}

/** Puts a mail back until `nextTryAt`; it does not count as a try. */
export async function postponeMail(
  db: Database,
  { id, epoch }: ClaimedMail,
  nextTryAt: Date,
): Promise<void> {
  await db.pool.query(
    `UPDATE outbox SET state = 'pending', next_try_at = ?, claim_expires_at = NULL
      WHERE id = ? AND epoch = ? AND state = 'sending'`,
    [nextTryAt, id, epoch],
  );
}
