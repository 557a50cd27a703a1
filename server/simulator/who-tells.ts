import type { Database } from '../lib/database.js';
import { world } from './world.js';

/** Who tells what no reader saw; null where somebody took them away. */
export interface WhoTells {
  railroadId: number | null;
  clerkId: number | null;
}

/** The railroad of the demo and its clerk, as the database knows them. */
export async function whoTells({ pool }: Pick<Database, 'pool'>): Promise<WhoTells> {
  const [row] = await pool.query<WhoTells[]>(
    `SELECT (SELECT id FROM organisations WHERE code = ?) AS railroadId,
       (SELECT id FROM people WHERE email = ?) AS clerkId`,
    [world.tellers.railroad, world.tellers.clerk],
  );
  return { railroadId: row?.railroadId ?? null, clerkId: row?.clerkId ?? null };
}
