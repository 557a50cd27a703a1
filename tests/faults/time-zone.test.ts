import { afterEach, expect, it, vi } from 'vitest';
import { testDatabaseUrl, useTestDatabase } from '../support/database.js';

useTestDatabase();
afterEach(() => {
  vi.unstubAllEnvs();
});

it('writes and reads instants in UTC, whatever zone the machine is set to', async () => {
  vi.stubEnv('TZ', 'America/Chicago');
  vi.resetModules();
  const { openDatabase } = await import('../../server/lib/database.js');
  const { pool, close } = openDatabase(testDatabaseUrl(), { connections: 1 });
  const instant = new Date('2026-03-04T05:06:07.890Z');
  const [row] = await pool.query<{ same: number; at: Date }[]>(
    `SELECT CAST(? AS DATETIME(3)) = '2026-03-04 05:06:07.890' AS same,
       CAST('2026-03-04 05:06:07.890' AS DATETIME(3)) AS at`,
    [instant],
  );
  await close();
  expect(row?.same).toBe(1);
  expect(row?.at).toEqual(instant);
});
