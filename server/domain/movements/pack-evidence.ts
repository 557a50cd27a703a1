import { groupsOf, type Evidence, type ReadGroup } from './evidence.js';

/**
 * One visit as it is stored: its tags once each, and its reads as `[ms after the one before,
 * antenna, place of the tag]`, the first counting from `f`; or its groups as `[antenna, tag,
 * first ms, last ms, reads]`.
 */
type Packed =
  | { f: number; t: string[]; r: [number, number, number][] }
  | { g: [number, string, number, number, number][] };

/** The evidence of a passage as short JSON. */
export function packEvidence(visits: readonly Evidence[]): string {
  return JSON.stringify(visits.map(pack));
}

/** The evidence of a passage from the text that `packEvidence` made. */
export function unpackEvidence(text: string): Evidence[] {
  return (JSON.parse(text) as Packed[]).map(unpack);
}

/** The reads of a passage counted by antenna and tag. */
export function countReads(
  visits: readonly Evidence[],
): Pick<ReadGroup, 'antenna' | 'tag' | 'count'>[] {
  const counts = new Map<string, ReadGroup>();
  for (const group of visits.flatMap(groupsOf)) {
    const key = `${group.antenna} ${group.tag}`;
    const known = counts.get(key);
    if (known) known.count += group.count;
    else counts.set(key, { ...group });
  }
  return [...counts.values()].map(({ antenna, tag, count }) => ({ antenna, tag, count }));
}

function pack(visit: Evidence): Packed {
  if (visit.groups) {
    return { g: visit.groups.map((g) => [g.antenna, g.tag, g.firstAt, g.lastAt, g.count]) };
  }
  const tags = [...new Set(visit.reads.map(({ tag }) => tag))];
  const places = new Map(tags.map((tag, place) => [tag, place]));
  const from = visit.reads[0]?.at ?? 0;
  let before = from;
  const reads = visit.reads.map(({ at, antenna, tag }): [number, number, number] => {
    const after = at - before;
    before = at;
    return [after, antenna, places.get(tag) as number];
  });
  return { f: from, t: tags, r: reads };
}

function unpack(packed: Packed): Evidence {
  if ('g' in packed) {
    const groups = packed.g.map(([antenna, tag, firstAt, lastAt, count]) => {
      return { antenna, tag, firstAt, lastAt, count };
    });
    return { groups };
  }
  let at = packed.f;
  const reads = packed.r.map(([after, antenna, place]) => {
    at += after;
    return { at, antenna, tag: packed.t[place] as string };
  });
  return { reads };
}
