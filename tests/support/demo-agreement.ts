import { isAeiHex } from '../../server/domain/identifiers/aei.js';
import type { TrueCrossing, TrueStray } from '../../server/simulator/truth-between.js';
import { world, type DemoReadPoint } from '../../server/simulator/world.js';
import { pointKey, type Found } from './demo-history.js';

const MINUTE = 60_000;

/** Units that no rule can know of: all tags dead, or strangers' EPC tags that no register names. */
const unreadable = new Set(
  world.units
    .filter(({ owner, tags }) =>
      tags.every(({ value, dead }) => dead || (owner === null && !isAeiHex(value))),
    )
    .map(({ identity }) => identity.compact),
);

/** Shares of true crossings: how what was made of the reads agrees with them. */
export interface Agreement {
  crossings: number;
  directionRight: number;
  directionWrong: number;
  /** Read, and no direction known; the rest was not read at all. */
  directionUnknown: number;
  /** Of the true arrivals and departures, those found within a minute. */
  arrivals: number;
  departures: number;
}

/**
 * Compares what was found with the truth at the read points of one kind of equipment. What passed
 * a silent reader is left out, and so is what no rule can know of.
 */
export function agreementOf(
  found: Found,
  truth: TrueCrossing[],
  equipment: DemoReadPoint['equipment'],
): Agreement {
  const points = world.readPoints.filter(
    (point) => point.equipment === equipment && point.kind === 'line',
  );
  const keys = new Set(points.map(pointKey));
  const real = truth.filter(
    (crossing) =>
      keys.has(`${crossing.site} ${crossing.readPoint}`) &&
      !crossing.isSilent &&
      !unreadable.has(crossing.unit),
  );
  const passages = grouped(found.passages, ({ point, unit }) => `${point} ${unit}`);
  const directions = real.map((crossing) => {
    const { site, readPoint, unit, at } = crossing;
    const seen = passages.get(`${site} ${readPoint} ${unit}`) ?? [];
    const close = seen.find((passage) => Math.abs(passage.at - at) < MINUTE);
    return { isRead: Boolean(close), known: close?.direction ?? null, true: crossing.direction };
  });
  const shareOf = (right: boolean) =>
    directions.filter(({ known, true: real }) => known !== null && (known === real) === right)
      .length / real.length;
  return {
    crossings: real.length,
    directionRight: shareOf(true),
    directionWrong: shareOf(false),
    directionUnknown:
      directions.filter(({ isRead, known }) => isRead && known === null).length / real.length,
    arrivals: shareWithin(found, real, 'arrive', 'arrivedAt'),
    departures: shareWithin(found, real, 'depart', 'departedAt'),
  };
}

function shareWithin(
  found: Found,
  real: TrueCrossing[],
  purpose: 'arrive' | 'depart',
  field: 'arrivedAt' | 'departedAt',
): number {
  const stays = grouped(found.stays, ({ site, unit }) => `${site} ${unit}`);
  const wanted = real.filter((crossing) => crossing.purpose === purpose);
  const close = wanted.filter(({ unit, site, at }) =>
    stays.get(`${site} ${unit}`)?.some((stay) => Math.abs((stay[field] ?? 0) - at) <= MINUTE),
  );
  return close.length / wanted.length;
}

/** Of the units that were heard where they did not go by, the share that were told to have. */
export function movedByStrays(found: Found, strays: TrueStray[]): number {
  const crossings = found.passages.filter(({ isCrossing }) => isCrossing);
  const passages = grouped(crossings, ({ point, unit }) => `${point} ${unit}`);
  const moved = strays.filter(({ site, readPoint, unit, at }) =>
    passages
      .get(`${site} ${readPoint} ${unit}`)
      ?.some((passage) => Math.abs(passage.at - at) < MINUTE),
  );
  return moved.length / strays.length;
}

function grouped<T>(values: T[], keyOf: (value: T) => string): Map<string, T[]> {
  const groups = new Map<string, T[]>();
  for (const value of values) {
    const group = groups.get(keyOf(value));
    if (group) group.push(value);
    else groups.set(keyOf(value), [value]);
  }
  return groups;
}

/** The figures in one line, for the report of a test. */
export function agreementLine(equipment: string, agreement: Agreement): string {
  const { crossings, directionRight, directionWrong, arrivals, departures } = agreement;
  const percent = (share: number) => `${(share * 100).toFixed(2)} %`;
  return (
    `${equipment}: ${crossings} crossings, direction right ${percent(directionRight)}, ` +
    `wrong ${percent(directionWrong)}, arrivals ${percent(arrivals)}, ` +
    `departures ${percent(departures)}`
  );
}
