/** A read that names a unit, as the rules use it: `at` in ms, `tag` as the reader gave it. */
export interface UsableRead {
  at: number;
  antenna: number;
  tag: string;
}

/** The reads of one tag at one antenna within a visit. */
export interface ReadGroup {
  antenna: number;
  tag: string;
  firstAt: number;
  lastAt: number;
  count: number;
}

/**
 * What is known of one visit: its reads in order, or, when there are more than `MOST_READS_KEPT`
 * (a car standing in the beam), only their groups. Which of the two depends on the reads alone, so
 * the order in which they came makes no difference.
 */
export type Evidence =
  { reads: UsableRead[]; groups?: undefined } | { groups: ReadGroup[]; reads?: undefined };

export const MOST_READS_KEPT = 240;

/** Total order within one site: time, antenna number, tag. */
export function compareReads(a: UsableRead, b: UsableRead): number {
  return a.at - b.at || a.antenna - b.antenna || compareText(a.tag, b.tag);
}

/** Order by code unit: the same on every machine, unlike `localeCompare`. */
export function compareText(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}

/** Evidence of the given reads, each once, in order. */
export function evidenceOf(reads: readonly UsableRead[]): Evidence {
  const sorted = [...reads].sort(compareReads);
  const once = sorted.filter((read, index) => {
    const before = sorted[index - 1];
    return !before || compareReads(before, read) !== 0;
  });
  return once.length <= MOST_READS_KEPT ? { reads: once } : { groups: groupReads(once) };
}

/** Evidence of two visits that turned out to be one. */
export function mergeEvidence(a: Evidence, b: Evidence): Evidence {
  if (a.reads && b.reads) return evidenceOf([...a.reads, ...b.reads]);
  return { groups: mergeGroups([...groupsOf(a), ...groupsOf(b)]) };
}

/** The evidence by tag and antenna, ordered by first read. */
export function groupsOf(evidence: Evidence): ReadGroup[] {
  return evidence.groups ?? groupReads(evidence.reads);
}

/** The first read of the visit in total order. */
export function firstRead(evidence: Evidence): UsableRead {
  const first = evidence.reads?.[0] ?? evidence.groups?.[0];
  if (!first) throw new Error('a visit without reads');
  return { at: 'at' in first ? first.at : first.firstAt, antenna: first.antenna, tag: first.tag };
}

/** Time of the last read, ms. */
export function lastReadAt(evidence: Evidence): number {
  if (evidence.reads) return (evidence.reads.at(-1) as UsableRead).at;
  return Math.max(...evidence.groups.map((group) => group.lastAt));
}

/** Number of reads. */
export function readCountOf(evidence: Evidence): number {
  if (evidence.reads) return evidence.reads.length;
  return evidence.groups.reduce((sum, group) => sum + group.count, 0);
}

function groupReads(reads: readonly UsableRead[]): ReadGroup[] {
  return mergeGroups(
    reads.map(({ at, antenna, tag }) => ({ antenna, tag, firstAt: at, lastAt: at, count: 1 })),
  );
}

function mergeGroups(groups: readonly ReadGroup[]): ReadGroup[] {
  const merged = new Map<string, ReadGroup>();
  for (const group of groups) {
    const key = `${group.antenna} ${group.tag}`;
    const known = merged.get(key);
    if (!known) {
      merged.set(key, { ...group });
      continue;
    }
    known.firstAt = Math.min(known.firstAt, group.firstAt);
    known.lastAt = Math.max(known.lastAt, group.lastAt);
    known.count += group.count;
  }
  return [...merged.values()].sort(
    (a, b) => a.firstAt - b.firstAt || a.antenna - b.antenna || compareText(a.tag, b.tag),
  );
}
