import type { PoolConnection } from 'mariadb';
import type { AskedStatement } from './count-statements.js';

interface PlanRow {
  select_type: string;
  table: string | null;
  type: string | null;
  key: string | null;
  Extra: string | null;
}

/** Sorts of whole tables or slices; the merge of some pages of them sorts a derived result. */
export async function sortsOf(
  connection: PoolConnection,
  { text, values }: AskedStatement,
): Promise<PlanRow[]> {
  const plan = await connection.query<PlanRow[]>(`EXPLAIN ${text}`, values);
  return plan.filter((row) => row.Extra?.includes('filesort') && !row.table?.startsWith('<'));
}

/** Rows and index entries that the storage engine steps over to answer a statement. */
export async function rowsTouched(
  connection: PoolConnection,
  { text, values }: AskedStatement,
): Promise<number> {
  await connection.query('FLUSH STATUS');
  await connection.query(text, values);
  const status = await connection.query<{ Variable_name: string; Value: string }[]>(
    `SHOW SESSION STATUS WHERE Variable_name IN ('Handler_read_first', 'Handler_read_key',
       'Handler_read_last', 'Handler_read_next', 'Handler_read_prev', 'Handler_read_rnd_next')`,
  );
  return status.reduce((sum, row) => sum + Number(row.Value), 0);
}
