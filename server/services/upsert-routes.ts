import { Op, type Transaction } from 'sequelize';
import type { RoutesInput } from '../contract/administration.js';
import type { Database } from '../lib/database.js';
import { Faults } from '../lib/faults.js';
import { modelsOf } from '../models/index.js';
import type { RouteEdge } from '../models/route-edge.js';
import { siteIdsByCode } from '../queries/ids-by-code.js';
import { changeConfiguration } from './change-configuration.js';

/**
 * Stores nodes by code and edges by ends and line, all or none. An edge runs both ways: given
 * from its other end it is the same edge.
 */
export async function upsertRoutes(
  db: Database,
  input: RoutesInput,
  requestedBy: number | null,
): Promise<void> {
  const faults = new Faults();
  faultRepeated(input, faults);
  await changeConfiguration(db, requestedBy, async (transaction) => {
    await upsertNodes(db, input.nodes, faults, transaction);
    const nodeIds = await nodeIdsByCode(db, input, transaction);
    input.edges.forEach(({ from, to }, index) => {
      if (from === to) faults.add(`/edges/${index}/to`, 'must be another node than from');
      for (const end of ['from', 'to'] as const) {
        const code = input.edges[index]?.[end] ?? '';
        if (!nodeIds.has(code)) faults.add(`/edges/${index}/${end}`, `${code} is not known`);
      }
    });
    faults.refuse();
    await upsertEdges(db, input.edges, nodeIds, transaction);
  });
}

function faultRepeated({ nodes, edges }: RoutesInput, faults: Faults): void {
  const seen = new Set<string>();
  const once = (key: string, pointer: string) => {
    if (seen.has(key)) faults.add(pointer, 'is given twice');
    seen.add(key);
  };
  nodes.forEach(({ code }, index) => once(code, `/nodes/${index}/code`));
  edges.forEach(({ from, to, line }, index) => {
    once(edgeKey(from, to, line), `/edges/${index}/line`);
  });
}

/** The same for both directions. */
function edgeKey(from: string | number, to: string | number, line: string): string {
  return `${[from, to].map(String).sort().join(' ')} ${line.toLowerCase()}`;
}

async function upsertNodes(
  db: Database,
  nodes: RoutesInput['nodes'],
  faults: Faults,
  transaction: Transaction,
): Promise<void> {
  if (nodes.length === 0) return;
  const codes = nodes.flatMap(({ code, site }) => (site ? [code, site] : [code]));
  const siteIds = await siteIdsByCode(db, codes, transaction);
  nodes.forEach(({ code, site }, index) => {
    if (!site) return;
    const pointer = `/nodes/${index}/site`;
    if (!siteIds.has(site)) faults.add(pointer, `${site} is not known`);
    else if (site !== code) faults.add(pointer, `must be ${code}: a site's node has its code`);
  });
  const rows = nodes.map(({ code, name, latitude, longitude }) => ({
    code,
    name,
    latitude,
    longitude,
    siteId: siteIds.get(code) ?? null,
  }));
  await modelsOf(db.sequelize).RouteNode.bulkCreate(rows, {
    updateOnDuplicate: ['name', 'latitude', 'longitude', 'siteId'],
    transaction,
  });
}

async function nodeIdsByCode(
  db: Database,
  { edges }: RoutesInput,
  transaction: Transaction,
): Promise<Map<string, number>> {
  const codes = new Set(edges.flatMap(({ from, to }) => [from, to]));
  const rows = await modelsOf(db.sequelize).RouteNode.findAll({
    attributes: ['id', 'code'],
    where: { code: [...codes] },
    transaction,
  });
  return new Map(rows.map((row) => [row.code, row.id]));
}

async function upsertEdges(
  db: Database,
  edges: RoutesInput['edges'],
  nodeIds: Map<string, number>,
  transaction: Transaction,
): Promise<void> {
  if (edges.length === 0) return;
  const { RouteEdge } = modelsOf(db.sequelize);
  const ids = [...nodeIds.values()];
  const known = await RouteEdge.findAll({
    where: { [Op.and]: [{ fromNodeId: ids }, { toNodeId: ids }] },
    transaction,
  });
  const byKey = new Map<string, RouteEdge>(
    known.map((edge) => [edgeKey(edge.fromNodeId, edge.toNodeId, edge.line), edge]),
  );
  const rows = edges.map(({ from, to, line, kind, railMetres }) => {
    const ends = { fromNodeId: nodeIds.get(from) ?? 0, toNodeId: nodeIds.get(to) ?? 0 };
    const present = byKey.get(edgeKey(ends.fromNodeId, ends.toNodeId, line));
    const { fromNodeId, toNodeId } = present ?? ends;
    return { fromNodeId, toNodeId, line, kind, railMetres };
  });
  await RouteEdge.bulkCreate(rows, {
    updateOnDuplicate: ['kind', 'railMetres', 'line'],
    transaction,
  });
}
