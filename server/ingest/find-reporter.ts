import { hashAccessToken } from '../lib/access-token.js';
import type { Database } from '../lib/database.js';
import { asUnavailable } from './as-unavailable.js';

/** Who reports: the token's own id and the organisation it belongs to. */
export interface Reporter {
  tokenId: number;
  organisation: { id: number; code: string };
}

/** The organisation whose token this is, or null when it is unknown or was replaced. */
export async function findReporter(db: Database, token: string): Promise<Reporter | null> {
  const [row] = await asUnavailable(() =>
    db.pool.query<{ token_id: number; organisation_id: number; code: string }[]>(
      `SELECT report_tokens.id AS token_id, organisation_id, code
         FROM report_tokens JOIN organisations ON organisations.id = organisation_id
        WHERE token_hash = ? AND revoked_at IS NULL`,
      [hashAccessToken(token)],
    ),
  );
  return row
    ? { tokenId: row.token_id, organisation: { id: row.organisation_id, code: row.code } }
    : null;
}
