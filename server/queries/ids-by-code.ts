import type { Transaction } from 'sequelize';
import type { Database } from '../lib/database.js';
import { modelsOf } from '../models/index.js';

/** Ids of the sites with these codes; codes that no site has are not in it. */
export async function siteIdsByCode(
  db: Database,
  codes: Iterable<string>,
  transaction?: Transaction,
): Promise<Map<string, number>> {
  return idsByCode(modelsOf(db.sequelize).Site, codes, transaction);
}

/** Ids of the organisations with these codes; codes that none has are not in it. */
export async function organisationIdsByCode(
  db: Database,
  codes: Iterable<string>,
  transaction?: Transaction,
): Promise<Map<string, number>> {
  return idsByCode(modelsOf(db.sequelize).Organisation, codes, transaction);
}

/** Ids of the route nodes with these codes; codes that none has are not in it. */
export async function routeNodeIdsByCode(
  db: Database,
  codes: Iterable<string>,
  transaction?: Transaction,
): Promise<Map<string, number>> {
  return idsByCode(modelsOf(db.sequelize).RouteNode, codes, transaction);
}

interface Coded {
  findAll(options: object): Promise<{ id: number; code: string }[]>;
}

async function idsByCode(
  model: unknown,
  codes: Iterable<string>,
  transaction: Transaction | undefined,
): Promise<Map<string, number>> {
  const code = [...new Set(codes)];
  if (code.length === 0) return new Map();
  const rows = await (model as Coded).findAll({
    attributes: ['id', 'code'],
    where: { code },
    transaction,
  });
  return new Map(rows.map((row) => [row.code, row.id]));
}
