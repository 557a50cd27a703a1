import { describe, expect, it } from 'vitest';
import { decodeAei } from '../../server/domain/identifiers/aei.js';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';
import {
  Traffic,
  trafficBetween,
  truthBetween,
  type Sent,
} from '../../server/simulator/traffic.js';
import { world } from '../../server/simulator/world.js';

const HOUR = 3_600_000;
const DAY = 24 * HOUR;
const start = Date.UTC(2026, 1, 9);
const readsOf = (sent: Sent[]) => sent.filter((each) => each.kind === 'read');

describe('the invented traffic', () => {
  const whole = trafficBetween(start, start + 3 * DAY);

  it('is the same however a span is cut', () => {
    const cuts = [0, 1, 2.5, 17, 17.001, 40, 71.99, 72].map((hours) => start + hours * HOUR);
    const alone = cuts.slice(1).flatMap((to, index) => trafficBetween(cuts[index] ?? to, to));
    expect(alone).toEqual(whole);
    const generator = new Traffic();
    const inTurn = cuts.slice(1).flatMap((to, index) => generator.between(cuts[index] ?? to, to));
    expect(inTurn).toEqual(whole);
  });

  it('is the same second by second', () => {
    const from = start + 9 * HOUR;
    const live = new Traffic();
    const seconds = Array.from({ length: 3_600 }, (_, second) => from + second * 1_000);
    const sent = seconds.flatMap((at) => live.between(at, at + 1_000));
    expect(sent).toEqual(
      whole.filter(({ deliveredAt }) => deliveredAt >= from && deliveredAt < from + HOUR),
    );
    expect(sent.length).toBeGreaterThan(50);
  });

  it('differs from seed to seed', () => {
    expect(trafficBetween(start, start + DAY, 'another')).not.toEqual(
      trafficBetween(start, start + DAY),
    );
  });

  it('comes in order of delivery, never before it was read', () => {
    const deliveries = whole.map(({ deliveredAt }) => deliveredAt);
    expect(deliveries).toEqual(deliveries.toSorted((a, b) => a - b));
    expect(readsOf(whole).filter((read) => read.readAt > read.deliveredAt)).toEqual([]);
  });

  it('has one site send two hours late, one with a clock behind, and all of them at work', () => {
    const lateBy = (code: string) =>
      readsOf(whole).filter((read) => read.site === code && read.deliveredAt - read.readAt > HOUR);
    expect(lateBy('QUERN').length).toBeGreaterThan(0);
    expect(world.sites.filter(({ code }) => lateBy(code).length > 0)).toHaveLength(1);
    const behind = readsOf(whole).filter(({ site }) => site === 'MARTEN');
    expect(behind.length).toBeGreaterThan(0);
    expect(behind.every((read) => read.deliveredAt - read.readAt > 40_000)).toBe(true);
  });

  it('sends some reads twice and every other once', () => {
    const keys = readsOf(whole).map(
      (read) => `${read.site} ${read.antenna} ${read.readAt} ${read.tag}`,
    );
    const share = 1 - new Set(keys).size / keys.length;
    expect(share).toBeGreaterThan(0.003);
    expect(share).toBeLessThan(0.02);
  });
});

describe('45 days of it', () => {
  const from = Date.UTC(2026, 0, 27, 11);
  const sent = trafficBetween(from, from + 45 * DAY);
  const reads = readsOf(sent);

  it('are 300,000 to 400,000 reads', () => {
    expect(reads.length).toBeGreaterThanOrEqual(300_000);
    expect(reads.length).toBeLessThanOrEqual(400_000);
  });

  it('come from every antenna of the region, and from no other', () => {
    const known = new Set(
      world.readPoints.flatMap(({ site, antennas }) =>
        antennas.map(({ number }) => `${site} ${number}`),
      ),
    );
    const heard = new Set(reads.map(({ site, antenna }) => `${site} ${antenna}`));
    expect(heard).toEqual(known);
  });

  it('show tags that name the unit they are on, but for garbled ones and train numbers', () => {
    const owners = new Map(
      world.units.flatMap((unit) => unit.tags.map((tag) => [tag.value, unit] as const)),
    );
    const strange = new Map<string, number>();
    for (const { tag } of reads) {
      if (!owners.has(tag)) strange.set(tag, (strange.get(tag) ?? 0) + 1);
    }
    const verdicts = [...strange.keys()].map((tag) => resolveTag(tag));
    const holds = verdicts.map((tag) => (tag.kind === 'hold' ? tag.hold : 'names a unit'));
    expect(new Set(holds)).toEqual(new Set(['check-failed', 'not-equipment']));
  });

  it('leave the dead tags unread and read cars on both sides', () => {
    const heard = new Set(reads.map(({ tag }) => tag));
    const tags = world.units.flatMap((unit) => unit.tags.filter(({ dead }) => dead));
    expect(tags.filter(({ value }) => heard.has(value))).toEqual([]);
    const cars = world.units.filter(({ kind, owner }) => kind === 'car' && owner !== null);
    const sides = cars.flatMap(({ tags: ofCar }) => ofCar);
    const deadShare = sides.filter(({ dead }) => dead).length / sides.length;
    expect(deadShare).toBeGreaterThanOrEqual(0.03);
    expect(deadShare).toBeLessThanOrEqual(0.05);
    expect(cars.filter(({ tags: ofCar }) => ofCar.every(({ dead }) => dead))).toHaveLength(4);
    const living = sides.filter(({ dead }) => !dead);
    const heardShare = living.filter(({ value }) => heard.has(value)).length / living.length;
    expect(heardShare).toBeGreaterThan(0.98);
  });

  it('silence one site for a whole day, and no other', () => {
    const truth = truthBetween(from, from + 45 * DAY);
    const days = (values: { site: string; at: number }[]) =>
      new Set(values.map(({ site, at }) => `${site} ${Math.floor(at / DAY)}`));
    const heard = days(reads.map(({ site, readAt }) => ({ site, at: readAt })));
    const silent = [...days(truth)].filter((day) => !heard.has(day));
    const inTheSpan = silent.filter(
      (day) => Number(day.split(' ')[1]) < (from + 45 * DAY) / DAY - 1,
    );
    expect(inTheSpan.length).toBeGreaterThanOrEqual(1);
    expect(inTheSpan.length).toBeLessThanOrEqual(5);
  });
});

describe('the truth behind it', () => {
  const truth = truthBetween(start, start + 21 * DAY);
  const kinds = new Map(world.units.map(({ identity, kind }) => [identity.compact, kind]));
  const moves = truth.filter(({ unit, purpose }) => {
    const kind = kinds.get(unit);
    return purpose !== 'spot' && kind !== 'locomotive' && kind !== 'endOfTrain';
  });

  it('lets nothing leave a place where it is not, or come where it already is', () => {
    const places = new Map<string, string | null>();
    const wrong = moves.filter(({ unit, site, purpose }) => {
      const before = places.get(unit);
      const goesIn = purpose === 'arrive' || purpose === 'sortBack';
      places.set(unit, goesIn ? site : null);
      if (before === undefined) return false;
      const isOut = purpose === 'depart' || purpose === 'sortOut';
      return isOut ? before !== site : goesIn ? before !== null : before !== null;
    });
    expect(wrong).toEqual([]);
    expect(places.size).toBeGreaterThan(1_200);
  });

  it('lets nothing go faster than a freight train', () => {
    const last = new Map<string, { site: string; at: number }>();
    const tooFast = moves.filter(({ unit, site, at }) => {
      const before = last.get(unit);
      last.set(unit, { site, at });
      return before !== undefined && before.site !== site && at - before.at < 0.7 * HOUR;
    });
    expect(tooFast).toEqual([]);
  });

  it('brings boxes from car to car', () => {
    const boxes = new Set(
      moves.filter(({ unit }) => kinds.get(unit) === 'container').map((m) => m.unit),
    );
    expect(boxes.size).toBeGreaterThan(400);
  });
});

describe('the invented register', () => {
  it('has some 900 cars and 400 boxes, and as many strangers', () => {
    const count = (kind: string, isOurs: boolean) =>
      world.units.filter((unit) => unit.kind === kind && (unit.owner !== null) === isOurs).length;
    expect(count('car', true)).toBe(900);
    expect(count('container', true)).toBe(400);
    expect(count('car', false)).toBe(900);
    expect(count('container', false)).toBe(400);
  });

  it('marks everything as nobody’s', () => {
    for (const { identity, kind } of world.units) {
      expect(identity.mark).toMatch(kind === 'container' ? /^ZQ[A-Z]U$/ : /^Q[A-Z]{1,3}$/);
    }
    const privateCars = world.units.filter((unit) => unit.kind === 'car' && unit.owner !== null);
    for (const { identity, owner } of privateCars) {
      expect(identity.mark.endsWith('X')).toBe(owner !== 'QUERNWICK');
    }
    expect(new Set(world.units.map(({ identity }) => identity.compact)).size).toBe(
      world.units.length,
    );
    expect(new Set(world.units.flatMap(({ tags }) => tags.map(({ value }) => value))).size).toBe(
      world.units.flatMap(({ tags }) => tags).length,
    );
  });

  it('gives every AEI tag the mark, number and side of its unit', () => {
    for (const { identity, groupCode, tags } of world.units) {
      for (const { value, side } of tags) {
        const tag = decodeAei(value);
        if (!tag) continue;
        expect(tag).toMatchObject({ groupCode, initial: identity.mark, firstCheckSumValid: true });
        expect(tag.number).toBe(Number(identity.number));
        if (side) expect(tag.side).toBe(side);
      }
    }
  });

  it('has some EPC tags, so that a unit is found by its registered tag alone', () => {
    const epcs = world.units.filter(({ tags }) => tags.some(({ value }) => !decodeAei(value)));
    expect(epcs.filter(({ owner }) => owner !== null)).toHaveLength(52);
    for (const { tags } of epcs) {
      for (const { value } of tags) expect(resolveTag(value)).toEqual({ kind: 'epc', value });
    }
  });
});

describe('the invented network', () => {
  it('is about 1,400 rail miles, no edge shorter than the great circle', () => {
    const metres = world.edges.reduce((sum, edge) => sum + edge.railMetres, 0);
    expect(metres / 1609.344).toBeGreaterThan(1_350);
    expect(metres / 1609.344).toBeLessThan(1_550);
    const at = new Map(world.nodes.map((node) => [node.code, node]));
    for (const { from, to, railMetres } of world.edges) {
      const [a, b] = [at.get(from), at.get(to)];
      expect(a && b && greatCircleMetres(a, b)).toBeLessThan(railMetres);
    }
  });

  it('has all three kinds of read points, and its people at real sites', () => {
    const kinds = new Set(world.readPoints.map(({ equipment }) => equipment));
    expect(kinds).toEqual(new Set(['sensors', 'twoOffsets', 'oneOffset']));
    const codes = new Set<string>(world.sites.map(({ code }) => code));
    const named = world.people.flatMap(({ sites }) => sites);
    expect(named.filter((code) => !codes.has(code))).toEqual([]);
  });
});

interface Position {
  latitude: number;
  longitude: number;
}

/** Haversine (Sinnott 1984) on a sphere of 6,371 km. */
function greatCircleMetres(a: Position, b: Position): number {
  const radians = Math.PI / 180;
  const [dLat, dLon] = [(b.latitude - a.latitude) * radians, (b.longitude - a.longitude) * radians];
  const h =
    Math.sin(dLat / 2) ** 2 +
    Math.cos(a.latitude * radians) * Math.cos(b.latitude * radians) * Math.sin(dLon / 2) ** 2;
  return 2 * 6_371_000 * Math.asin(Math.sqrt(h));
}
