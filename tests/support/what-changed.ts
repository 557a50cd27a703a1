import type { UnitRef } from '../../server/domain/movements/configuration.js';
import type { Passage } from '../../server/domain/movements/passages.js';
import type { PassKey } from '../../server/domain/movements/passes.js';
import { BESIDE_MS } from '../../server/domain/movements/strays.js';
import type { UnitSighting } from '../../server/domain/movements/unit-facts.js';

/** Passages by place and time, with what their units' histories take from them. */
export type Members = Map<string, { unit: UnitRef; at: number; pass: string; value: string }>;

/** Units whose passages differ, and the earliest difference of each. */
export function differences(before: Members, after: Members): Map<UnitRef, number> {
  const dirty = new Map<UnitRef, number>();
  for (const [one, other] of [
    [before, after],
    [after, before],
  ] as const) {
    for (const [key, { unit, at, value }] of one) {
      if (other.get(key)?.value === value) continue;
      dirty.set(unit, Math.min(dirty.get(unit) ?? Infinity, at));
    }
  }
  return dirty;
}

/** Companions of changed passages: there, and where the same unit was seen next. */
export function markCompanions(
  sightings: ReadonlyMap<UnitRef, readonly UnitSighting[]>,
  before: Members,
  after: Members,
  dirty: Map<UnitRef, number>,
): void {
  const passes = new Set<string>();
  for (const [key, member] of [...before, ...after]) {
    if (before.get(key)?.value === after.get(key)?.value) continue;
    passes.add(member.pass);
    const own = sightings.get(member.unit) ?? [];
    const next = own.find(({ firstAt }) => firstAt > member.at);
    if (next) passes.add(passText(next.pass));
    for (const one of own.filter(({ firstAt }) => firstAt === member.at)) {
      passes.add(passText(one.pass));
    }
  }
  for (const member of after.values()) {
    if (!passes.has(member.pass)) continue;
    dirty.set(member.unit, Math.min(dirty.get(member.unit) ?? Infinity, member.at));
  }
}

/** A pass as text, to look up by. */
export function passText({ readPointId, startedAt, ordinal }: PassKey): string {
  return `${readPointId} ${startedAt} ${ordinal}`;
}

/** Stored passages of the units concerned that are near enough to come out otherwise. */
export function touchedBy(
  { units, since, until }: { units: ReadonlySet<UnitRef>; since: number; until: number },
  all: readonly Passage[],
  gapMs: number,
) {
  const spans = all
    .filter(({ unit }) => units.has(unit))
    .map(({ first, lastAt }) => ({ firstAt: first.at, lastAt }));
  const within = (from: number, to: number) =>
    spans.filter(({ firstAt, lastAt }) => lastAt >= from && firstAt <= to);
  const joined = within(since - gapMs, until + gapMs);
  const first = Math.min(since, ...joined.map(({ firstAt }) => firstAt));
  const last = Math.max(until, ...joined.map(({ lastAt }) => lastAt));
  return within(first - BESIDE_MS, last + BESIDE_MS);
}
