import type { PoolConnection } from 'mariadb';
import { v4 as uuid } from 'uuid';
import type { Context } from '../lib/context.js';
import { messageIdAt } from '../mail/transport.js';

/**
 * Writes one outbox row for each whom a watch tells, in the transaction that raised the alerts.
 * The Message-ID is fixed here, so that every try carries the same.
 */
export async function queueMail(
  { env }: Context,
  connection: PoolConnection,
  notice: { watchId: number; noticeId: string; addresses: string[]; now: Date },
): Promise<number> {
  const people = await connection.query<{ id: number; email: string }[]>(
    `SELECT p.id, p.email FROM watch_people wp JOIN people p ON p.id = wp.person_id
      WHERE wp.watch_id = ? ORDER BY p.id`,
    [notice.watchId],
  );
  const known = new Set(people.map((person) => person.email.toLowerCase()));
  const recipients = [
    ...people.map(({ id, email }) => ({ personId: id, address: email })),
    ...notice.addresses
      .filter((address) => !known.has(address))
      .map((address) => ({ personId: null, address })),
  ];
  if (recipients.length === 0) return 0;
  const rows = recipients.map(({ personId, address }) => [
    messageIdAt(env.publicUrl, uuid()),
    notice.noticeId,
    notice.watchId,
    personId,
    address,
    notice.now,
    notice.now,
  ]);
  await connection.query(
    `INSERT INTO outbox
       (message_id, notice_id, watch_id, person_id, address, state, next_try_at, created_at)
     VALUES ${rows.map(() => "(?, ?, ?, ?, ?, 'pending', ?, ?)").join(', ')}`,
    rows.flat(),
  );
  return rows.length;
}
