import { expect, it } from 'vitest';
import { withTransaction } from '../../../server/lib/database.js';
import { dropLease, keepLease, LeaseLost, takeLease } from '../../../server/lib/lease.js';
import { useTestDatabase } from '../../support/database.js';

const db = useTestDatabase();
const HOUR_S = 3_600;

const expire = () =>
  db.pool.query('UPDATE worker_leases SET expires_at = NOW(3) - INTERVAL 1 SECOND');

it('is held by one worker until it expires or is given back', async () => {
  const first = await takeLease(db, 'work', 'first', HOUR_S);
  expect(first).toMatchObject({ holder: 'first', epoch: 1 });
  expect(await takeLease(db, 'work', 'second', HOUR_S)).toBeNull();
  expect(await takeLease(db, 'other work', 'second', HOUR_S)).toMatchObject({ epoch: 1 });
  expect(await takeLease(db, 'work', 'first', HOUR_S)).toEqual(first);
  await dropLease(db, first!);
  expect(await takeLease(db, 'work', 'second', HOUR_S)).toMatchObject({ epoch: 2 });
});

it('lets nothing be committed by a worker that lost it, though it has it again by name', async () => {
  const stale = await takeLease(db, 'work', 'first', HOUR_S);
  await expire();
  expect(await takeLease(db, 'work', 'second', HOUR_S)).toMatchObject({ epoch: 2 });
  await expect(withTransaction(db.pool, (c) => keepLease(c, stale!))).rejects.toThrow(LeaseLost);
  await expire();
  const again = await takeLease(db, 'work', 'first', HOUR_S);
  expect(again).toMatchObject({ epoch: 3 });
  await expect(withTransaction(db.pool, (c) => keepLease(c, stale!))).rejects.toThrow(LeaseLost);
  await withTransaction(db.pool, (connection) => keepLease(connection, again!));
});

it('given back by a worker that lost it stays with whoever has it now', async () => {
  const stale = await takeLease(db, 'work', 'first', HOUR_S);
  await expire();
  await takeLease(db, 'work', 'second', HOUR_S);
  await dropLease(db, stale!);
  expect(await takeLease(db, 'work', 'third', HOUR_S)).toBeNull();
});
