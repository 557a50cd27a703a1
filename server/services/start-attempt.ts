import { withTransaction, type Database } from '../lib/database.js';
import type { ClaimedMail } from './claim-mail.js';

/** A try that is written down but has no answer yet. */
export interface StartedAttempt {
  id: number;
  number: number;
}

/** Writes a try down before the mail is handed over; null when the claim is lost meanwhile. */
export function startAttempt(
  db: Database,
  mail: ClaimedMail,
  now: Date,
): Promise<StartedAttempt | null> {
  return withTransaction(db.pool, async (connection) => {
    const held = await connection.query<{ affectedRows: number }>(
      `UPDATE outbox SET tries = tries + 1
        WHERE id = ? AND epoch = ? AND state = 'sending' AND claim_expires_at > UTC_TIMESTAMP(3)`,
      [mail.id, mail.epoch],
    );
    if (held.affectedRows !== 1) return null;
    const number = mail.tries + 1;
    const { insertId } = await connection.query<{ insertId: number }>(
      `INSERT INTO mail_attempts (outbox_id, number, epoch, outcome, started_at)
       VALUES (?, ?, ?, 'started', ?)`,
      [mail.id, number, mail.epoch, now],
    );
    return { id: insertId, number };
  });
}
