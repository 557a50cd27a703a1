import type { Network, UnitRef } from './configuration.js';
import { directionByHistory, mayVote, type Adjacent, type Voter } from './direction-by-history.js';
import { compareReads, compareText } from './evidence.js';
import type { Passage } from './passages.js';
import { isUndirected, withHistory, type Pass, type PassMember } from './passes.js';

/** A unit's passage in a pass, found again when the pass gets its direction. */
interface Entry {
  passage: Passage;
  readPointId: number;
  index: number;
}

/**
 * Gives every pass of which its own reads tell no direction the one that history tells, in order
 * of time: what is decided of a pass is known to the later ones at its read point.
 */
export function directPasses(network: Network, passes: Map<number, Pass[]>): void {
  const places = placesOf(network, passes);
  const adjacent = (entry: Entry | undefined): Adjacent | null => {
    const pass = entry && passes.get(entry.readPointId)?.[entry.index];
    const member = pass?.members.find(({ passage }) => passage === entry?.passage);
    return entry && member ? adjacentOf(entry.readPointId, member) : null;
  };
  for (const [readPointId, ofPoint] of passes) {
    ofPoint.forEach((pass, index) => {
      if (!isUndirected(pass)) return;
      const severalOffsets = network.offsetsOf(readPointId) > 1;
      const electorate = pass.members.filter(({ passage, role }) => {
        const { first, lastAt, visits } = passage;
        return mayVote({ role, firstAt: first.at, lastAt, visits }, severalOffsets);
      });
      const voters = electorate.map(({ passage }): Voter => {
        const { own, at } = places.get(passage) as Place;
        const { lastAt } = passage;
        const [before, after] = [adjacent(own[at - 1]), adjacent(own[at + 1])];
        return { firstAt: passage.first.at, lastAt, before, after };
      });
      ofPoint[index] = withHistory(pass, directionByHistory(network, readPointId, voters));
    });
  }
}

function adjacentOf(readPointId: number, { passage, direction, basis }: PassMember): Adjacent {
  return {
    readPointId,
    firstAt: passage.first.at,
    lastAt: passage.lastAt,
    direction,
    basis,
  };
}

interface Place {
  own: Entry[];
  at: number;
}

/** Where each passage stands among its unit's, by first reads in total order. */
function placesOf(network: Network, passes: Map<number, Pass[]>): Map<Passage, Place> {
  const units = new Map<UnitRef, Entry[]>();
  for (const [readPointId, ofPoint] of passes) {
    ofPoint.forEach(({ members }, index) => {
      for (const { passage } of members) {
        const own = units.get(passage.unit) ?? [];
        units.set(passage.unit, own);
        own.push({ passage, readPointId, index });
      }
    });
  }
  const siteCode = (entry: Entry) => network.site(network.readPoint(entry.readPointId).siteId).code;
  const places = new Map<Passage, Place>();
  for (const own of units.values()) {
    own.sort(
      (a, b) =>
        a.passage.first.at - b.passage.first.at ||
        compareText(siteCode(a), siteCode(b)) ||
        compareReads(a.passage.first, b.passage.first),
    );
    own.forEach(({ passage }, at) => places.set(passage, { own, at }));
  }
  return places;
}
