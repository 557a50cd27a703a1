import type { ReadPointInput } from '../contract/administration.js';
import type { PointerTo } from '../lib/batch.js';
import type { Faults } from '../lib/faults.js';
import type { ReadPoint } from '../models/read-point.js';
import { linesOf } from '../presenters/lines-of.js';

const sides = [
  ['decreasing', 'decreasingToward', 'decreasingSiteId'],
  ['increasing', 'increasingToward', 'increasingSiteId'],
] as const;

/**
 * The lines that are given, else those it has. A side that is a site has none: what it had is
 * dropped. The text of the present row stays as it is while it says the same.
 */
export function towardColumn(
  item: ReadPointInput,
  row: Pick<ReadPoint, 'decreasingSiteId' | 'increasingSiteId'>,
  present: ReadPoint | undefined,
  nodeIds: ReadonlyMap<string, number>,
  faults: Faults,
  at: PointerTo,
): string {
  const before = linesOf(present?.toward ?? '{}');
  const lines = { ...before };
  for (const [side, field, siteId] of sides) {
    const isLine = item.kind === 'line' && item[place(side)] == null && row[siteId] === null;
    faultLines(item, field, isLine, nodeIds, faults, at);
    lines[side] = isLine ? (item[field] ?? before[side]) : [];
  }
  const isSame = sides.every(([side]) => haveSame(lines[side], before[side]));
  return isSame && present ? present.toward : JSON.stringify(lines);
}

const place = <T extends 'decreasing' | 'increasing'>(side: T) => `${side}Place` as const;

function faultLines(
  item: ReadPointInput,
  field: 'decreasingToward' | 'increasingToward',
  isLine: boolean,
  nodeIds: ReadonlyMap<string, number>,
  faults: Faults,
  at: PointerTo,
): void {
  const codes = item[field] ?? [];
  if (codes.length > 0 && !isLine) {
    const why =
      item.kind === 'spot' ? 'a spot has no lines' : 'this side is a site, not the open line';
    faults.add(at(field), `must be empty or left out: ${why}`);
    return;
  }
  codes.forEach((code, index) => {
    if (!nodeIds.has(code)) faults.add(at(field, index), `${code} is not known`);
    else if (code === item.site) {
      faults.add(at(field, index), 'must be another node than that of its own site');
    }
  });
}

const haveSame = (one: readonly string[], other: readonly string[]) =>
  one.length === other.length && one.every((code) => other.includes(code));
