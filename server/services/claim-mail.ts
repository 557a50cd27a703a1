import { withTransaction, type Database } from '../lib/database.js';

/** Longer than a hand-over may take; after that another sender may take the mail over. */
const CLAIM_SECONDS = 180;

/** A mail that this sender alone may hand over while the claim lasts. */
export interface ClaimedMail {
  id: number;
  /** Grows with every claim: whoever holds an older one has lost the mail. */
  epoch: number;
  messageId: string;
  noticeId: string;
  watchId: number;
  personId: number | null;
  address: string;
  tries: number;
}

interface ClaimedRow {
  id: number;
  epoch: number;
  message_id: string;
  notice_id: string;
  watch_id: number;
  person_id: number | null;
  address: string;
  tries: number;
}

/**
 * Claims one mail by a conditional write and commits it before anything is sent; null when it is
 * not due, or another sender has it. Claims run out by the clock of the database. A try that the
 * claim before left without an answer is written down as unclear: the mail may go twice.
 */
export function claimMail(db: Database, id: number, now: Date): Promise<ClaimedMail | null> {
  return withTransaction(db.pool, async (connection) => {
    const claim = await connection.query<{ affectedRows: number }>(
      `UPDATE outbox
          SET state = 'sending', epoch = epoch + 1,
              claim_expires_at = UTC_TIMESTAMP(3) + INTERVAL ${CLAIM_SECONDS} SECOND
        WHERE id = ? AND ((state = 'pending' AND next_try_at <= ?)
           OR (state = 'sending' AND claim_expires_at <= UTC_TIMESTAMP(3)))`,
      [id, now],
    );
    if (claim.affectedRows !== 1) return null;
    const left = await connection.query<{ affectedRows: number }>(
      `UPDATE mail_attempts
          SET outcome = 'unclear', finished_at = ?, detail = 'The sender stopped before the answer.'
        WHERE outbox_id = ? AND outcome = 'started'`,
      [now, id],
    );
    if (left.affectedRows > 0) {
      await connection.query('UPDATE outbox SET may_have_gone_twice = 1 WHERE id = ?', [id]);
    }
    const [row] = await connection.query<ClaimedRow[]>(
      `SELECT id, epoch, message_id, notice_id, watch_id, person_id, address, tries
         FROM outbox WHERE id = ?`,
      [id],
    );
    return row ? claimedFrom(row) : null;
  });
}

function claimedFrom(row: ClaimedRow): ClaimedMail {
  return {
    id: row.id,
    epoch: row.epoch,
    messageId: row.message_id,
    noticeId: row.notice_id,
    watchId: row.watch_id,
    personId: row.person_id,
    address: row.address,
    tries: row.tries,
  };
}
