import type { PoolConnection } from 'mariadb';
import type { Database } from './database.js';

/** The right to do one kind of work, until it expires; `epoch` tells one holding from the next. */
export interface Lease {
  name: string;
  holder: string;
  epoch: number;
}

/** Somebody else holds the lease now: whatever was being written must not be committed. */
export class LeaseLost extends Error {
  constructor(name: string) {
    super(`the lease ${name} has gone to another worker`);
    this.name = 'LeaseLost';
  }
}

const DEFAULT_SECONDS = 30;

/** Takes the lease when it is free, expired (by the database's clock) or ours; else null. */
export async function takeLease(
  db: Database,
  name: string,
  holder: string,
  seconds = DEFAULT_SECONDS,
): Promise<Lease | null> {
  await db.pool.query(
    `INSERT INTO worker_leases (name, holder, epoch, expires_at)
     VALUES (?, ?, 1, NOW(3) + INTERVAL ? SECOND)
     ON DUPLICATE KEY UPDATE
       epoch = IF(holder <> VALUES(holder) AND expires_at < NOW(3), epoch + 1, epoch),
       holder = IF(expires_at < NOW(3), VALUES(holder), holder),
       expires_at = IF(holder = VALUES(holder), VALUES(expires_at), expires_at)`,
    [name, holder, seconds],
  );
  const [row] = await db.pool.query<{ holder: string; epoch: number }[]>(
    'SELECT holder, epoch FROM worker_leases WHERE name = ?',
    [name],
  );
  return row?.holder === holder ? { name, holder, epoch: row.epoch } : null;
}

/**
 * Extends the lease as part of the caller's transaction, which thereby waits for nobody but a
 * holder that is committing. Throws LeaseLost when it is no longer ours.
 */
export async function keepLease(
  connection: PoolConnection,
  lease: Lease,
  seconds = DEFAULT_SECONDS,
): Promise<void> {
  const [row] = await connection.query<{ held: number }[]>(
    'SELECT COUNT(*) AS held FROM worker_leases WHERE name = ? AND holder = ? AND epoch = ? FOR UPDATE',
    [lease.name, lease.holder, lease.epoch],
  );
  if (!row?.held) throw new LeaseLost(lease.name);
  await connection.query(
    'UPDATE worker_leases SET expires_at = NOW(3) + INTERVAL ? SECOND WHERE name = ?',
    [seconds, lease.name],
  );
}

/** Gives the lease back so that another worker need not wait for it to expire. */
export async function dropLease(db: Database, lease: Lease): Promise<void> {
  await db.pool.query(
    'UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND WHERE name = ? AND holder = ? AND epoch = ?',
    [lease.name, lease.holder, lease.epoch],
  );
}

/** Runs `act` while holding the lease; does nothing and answers false when another holds it. */
export async function withLease(
  db: Database,
  name: string,
  holder: string,
  act: (lease: Lease) => Promise<void>,
): Promise<boolean> {
  const lease = await takeLease(db, name, holder);
  if (!lease) return false;
  try {
    await act(lease);
  } finally {
    await dropLease(db, lease);
  }
  return true;
}
