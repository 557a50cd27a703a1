import { hashAccessToken } from '../lib/access-token.js';
import type { Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';

/** Who sends: the token's own id and the site it belongs to. */
export interface Reader {
  tokenId: number;
  site: { id: number; code: string };
}

/** The reader whose token this is, or null when it is unknown or was replaced. */
export async function findReader(db: Database, token: string): Promise<Reader | null> {
  const rows = await asUnavailable(() =>
    db.pool.query<{ token_id: number; site_id: number; code: string }[]>(
      `SELECT reader_tokens.id AS token_id, site_id, code
         FROM reader_tokens JOIN sites ON sites.id = site_id
        WHERE token_hash = ? AND revoked_at IS NULL`,
      [hashAccessToken(token)],
    ),
  );
  const [row] = rows;
  return row ? { tokenId: row.token_id, site: { id: row.site_id, code: row.code } } : null;
}
