import { QueryTypes, type Transaction } from 'sequelize';
import { conflict } from '../errors.js';
import type { Database } from '../lib/database.js';

/** What may still refer to a record: words for people, and a query that finds one such row. */
export interface Use {
  words: string;
  sql: string;
}

/** Throws 409 that lists everything that still refers to a record; `:id` stands for it. */
export async function refuseUsed(
  db: Database,
  uses: Use[],
  replacements: Record<string, unknown>,
  transaction: Transaction,
): Promise<void> {
  const text = uses.map(({ sql }, index) => `EXISTS (${sql}) AS u${index}`).join(', ');
  const [row = {}] = await db.sequelize.query<Record<string, number>>(`SELECT ${text}`, {
    type: QueryTypes.SELECT,
    replacements,
    transaction,
  });
  const found = uses.filter((_use, index) => Number(row[`u${index}`]) === 1);
  if (found.length === 0) return;
  throw conflict(
    `It cannot go while these refer to it: ${found.map((use) => use.words).join(', ')}.`,
  );
}
