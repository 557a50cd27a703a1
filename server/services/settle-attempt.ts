import type { PoolConnection } from 'mariadb';
import { withTransaction, type Database } from '../lib/database.js';
import type { Delivery } from '../mail/transport.js';
import type { ClaimedMail } from './claim-mail.js';
import type { StartedAttempt } from './start-attempt.js';

/** Over about four hours; then the mail is given up. */
export const MOST_TRIES = 12;
const FIRST_WAIT_MS = 15_000;
const LONGEST_WAIT_MS = 3_600_000;
const REASON_LENGTH = 400;

/** How long to wait after this many tries: 15 s, 30 s, 1 min … one hour at most. */
export function waitAfter(tries: number): number {
  return Math.min(FIRST_WAIT_MS * 2 ** (tries - 1), LONGEST_WAIT_MS);
}

/** Writes down how a try ended and what follows: sent, given up, or due again later. */
export function settleAttempt(
  db: Database,
  mail: ClaimedMail,
  attempt: StartedAttempt,
  delivery: Delivery,
  now: Date,
): Promise<void> {
  const detail = delivery.detail.slice(0, REASON_LENGTH);
  return withTransaction(db.pool, async (connection) => {
    await connection.query(
      'UPDATE mail_attempts SET outcome = ?, detail = ?, finished_at = ? WHERE id = ?',
      [delivery.outcome, detail, now, attempt.id],
    );
    const isHeld = await follow(connection, mail, attempt, delivery, now);
    // Someone took the mail over while this one was under way: two may have gone.
    const isDoubtful =
      delivery.outcome === 'unclear' || (!isHeld && delivery.outcome === 'accepted');
    if (isDoubtful) {
      await connection.query('UPDATE outbox SET may_have_gone_twice = 1 WHERE id = ?', [mail.id]);
    }
  });
}

/** False when another sender holds the mail by now, and so nothing of it was changed. */
async function follow(
  connection: PoolConnection,
  mail: ClaimedMail,
  attempt: StartedAttempt,
  delivery: Delivery,
  now: Date,
): Promise<boolean> {
  const next = nextState(attempt.number, delivery, now);
  const result = await connection.query<{ affectedRows: number }>(
    `UPDATE outbox
        SET state = ?, reason = ?, sent_at = ?, next_try_at = COALESCE(?, next_try_at),
            claim_expires_at = NULL
      WHERE id = ? AND epoch = ? AND state = 'sending'`,
    [next.state, next.reason, next.sentAt, next.nextTryAt, mail.id, mail.epoch],
  );
  return result.affectedRows === 1;
}

function nextState(tries: number, delivery: Delivery, now: Date) {
  if (delivery.outcome === 'accepted') {
    return { state: 'sent', reason: null, sentAt: now, nextTryAt: null };
  }
  const reason = delivery.detail.slice(0, REASON_LENGTH);
  const isHopeless = delivery.outcome === 'refused' && delivery.permanent;
  if (isHopeless || tries >= MOST_TRIES) {
    return { state: 'failed', reason, sentAt: null, nextTryAt: null };
  }
  const nextTryAt = new Date(now.getTime() + waitAfter(tries));
  return { state: 'pending', reason, sentAt: null, nextTryAt };
}
