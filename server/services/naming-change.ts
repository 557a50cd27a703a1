import { begin, end, type Validity } from '../lib/validity.js';

/** A tag or an identity, and the unit that it names while it is valid. */
export interface NamingRow extends Validity {
  unitId: number;
  value: string;
}

/** A stretch of time over which a tag or an identity may name another unit than before. */
export interface NamingChange extends Validity {
  kind: 'tag' | 'identity';
  value: string;
  /** The units that it named or now names, at any time. */
  unitIds: number[];
}

/** What changed from the rows of `before` to those of `after`; both hold all rows of their values. */
export function namingChanges(
  kind: NamingChange['kind'],
  before: readonly NamingRow[],
  after: readonly NamingRow[],
): NamingChange[] {
  const stood = new Set(before.map(keyOf));
  const stands = new Set(after.map(keyOf));
  const changed = [
    ...before.filter((row) => !stands.has(keyOf(row))),
    ...after.filter((row) => !stood.has(keyOf(row))),
  ];
  const holders = new Map<string, Set<number>>();
  for (const { value, unitId } of [...before, ...after]) {
    holders.set(value, (holders.get(value) ?? new Set()).add(unitId));
  }
  return changed.map(({ value, validFrom, validTo }) => {
    const unitIds = [...(holders.get(value) ?? [])];
    return { kind, value, validFrom, validTo, unitIds };
  });
}

function keyOf(row: NamingRow): string {
  return [row.unitId, begin(row), end(row), row.value].join(' ');
}
