import type { Context } from '../lib/context.js';
import { replaceReaderToken } from '../services/replace-reader-token.js';
import { world } from './world.js';

/**
 * New reader tokens for the demo's sites, by site code. They are known to the caller alone: the
 * database has their hashes, and no file has them.
 */
export async function rotateReaderTokens(
  context: Pick<Context, 'db' | 'clock'>,
): Promise<Map<string, string>> {
  const codes = world.sites.map(({ code }) => code);
  const rows = await context.db.pool.query<{ id: number; code: string }[]>(
    'SELECT id, code FROM sites WHERE code IN (?)',
    [codes],
  );
  const tokens = new Map<string, string>();
  for (const { id, code } of rows) tokens.set(code, await replaceReaderToken(context, id));
  return tokens;
}
