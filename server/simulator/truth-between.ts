import { Branch, roundNumbers } from './traffic/branch/branch.js';
import { trainOf } from './traffic/branch/consists.js';
import { instantOf, roundOf } from './traffic/branch/round.js';
import { kilnAt } from './traffic/branch/told.js';
import { isLost } from './traffic/disturbances.js';
import { Operations } from './traffic/operations.js';
import { momentsOf, type Direction, type Pass, type Purpose } from './traffic/pass.js';
import { faintReads } from './traffic/sent.js';
import { DEMO_SEED, LONGEST_PASS_MS } from './traffic.js';

/** One unit's true crossing of a read point, whether anybody read it or not. */
export interface TrueCrossing {
  unit: string;
  site: string;
  /** A code that no read point has: a lead without a reader. */
  readPoint: string;
  direction: Direction;
  purpose: Purpose;
  /** When its middle went by. */
  at: number;
  /** The site's reader reported nothing of it that counts. */
  isSilent: boolean;
}

/** A unit heard at a read point that it did not cross. */
export interface TrueStray {
  unit: string;
  site: string;
  readPoint: string;
  at: number;
  why: 'parallel' | 'beside' | 'beam';
}

/** Every true crossing in [from, to), in order of time, those that nobody read included. */
export function truthBetween(from: number, to: number, seed = DEMO_SEED): TrueCrossing[] {
  const operations = new Operations(seed);
  operations.skipTo(from - LONGEST_PASS_MS);
  const { passes } = new Branch(seed).between(from - LONGEST_PASS_MS, to);
  return [...operations.advance(to), ...passes]
    .flatMap((pass) => crossingsOf(seed, pass))
    .concat(roundNumbers(from, to).flatMap((number) => unseenOf(seed, number)))
    .filter(({ at }) => at >= from && at < to)
    .sort((a, b) => a.at - b.at);
}

/** What was heard in [from, to) of units that did not go by: on the next track, or standing. */
export function strayTruthBetween(from: number, to: number, seed = DEMO_SEED): TrueStray[] {
  const { passes, loose } = new Branch(seed).between(from, to);
  const parallel = passes.flatMap((pass) =>
    faintReads(seed, pass).flatMap(({ tag, at }): TrueStray[] => {
      const { site, code: readPoint } = pass.faintAt ?? pass.point;
      const unit = wearerOf(pass, tag);
      return unit === null ? [] : [{ unit, site, readPoint, at, why: 'parallel' }];
    }),
  );
  const standing = loose.flatMap(({ site, at, stands }): TrueStray[] =>
    stands ? [{ unit: stands.unit, readPoint: stands.readPoint, site, at, why: stands.how }] : [],
  );
  return [...parallel, ...standing].sort((a, b) => a.at - b.at);
}

function wearerOf({ vehicles }: Pass, tag: string): string | null {
  const worn = vehicles.find(({ unit, tags = unit.tags }) =>
    tags.some(({ value }) => value === tag),
  );
  const load = vehicles
    .flatMap(({ loads }) => loads)
    .find(({ unit }) => unit.tags.some(({ value }) => value === tag));
  return (worn ?? load)?.unit.identity.compact ?? null;
}

function crossingsOf(seed: string, pass: Pass): TrueCrossing[] {
  const { point, direction, purpose } = pass;
  const moments = momentsOf(pass);
  const silent = isLost(seed, point.site, pass.at);
  return pass.vehicles.flatMap(({ unit, loads }, index) => {
    const at = moments[index] ?? pass.at;
    return [unit, ...loads.map((load) => load.unit)].map(({ identity }) => {
      const { site, code: readPoint } = point;
      const unit = identity.compact;
      return { unit, site, readPoint, direction, purpose, at, isSilent: silent };
    });
  });
}

/** Out of Sorrel and back by the lead that is not equipped, and into the kiln that has no reader. */
function unseenOf(seed: string, number: number): TrueCrossing[] {
  const round = roundOf(seed, number);
  const east = { site: 'SORREL', readPoint: 'E', isSilent: true } as const;
  const kiln = { site: 'BRYONY', readPoint: 'L', isSilent: true } as const;
  const moves = [
    { ...east, purpose: 'depart', at: instantOf(round, 26, 'out by the east'), which: 'first' },
    { ...east, purpose: 'arrive', at: instantOf(round, 51, 'in by the east'), which: 'first' },
    { ...kiln, purpose: 'arrive', at: kilnAt(round, 'arrived'), which: 'second' },
    { ...kiln, purpose: 'depart', at: kilnAt(round, 'departed'), which: 'second' },
  ] as const;
  return moves.flatMap(({ which, ...move }) =>
    trainOf(round, which, move.at).flatMap(({ unit, loads }) =>
      [unit, ...loads.map((load) => load.unit)].map(({ identity }) => {
        return { ...move, unit: identity.compact, direction: 'increasing' as const };
      }),
    ),
  );
}
