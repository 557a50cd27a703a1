import { describe, expect, it } from 'vitest';
import { resolveTag } from '../../server/domain/identifiers/resolve-tag.js';
import { Traffic, trafficBetween, type Sent } from '../../server/simulator/traffic.js';
import { truthBetween } from '../../server/simulator/truth-between.js';
import { world } from '../../server/simulator/world.js';

const HOUR = 3_600_000;
const DAY = 24 * HOUR;
const start = Date.UTC(2026, 1, 9);
const branch = ['ROWAN', 'SORREL', 'LINNET', 'PIPIT', 'BRYONY'];
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
    const ahead = readsOf(whole).filter((read) => read.readAt > read.deliveredAt);
    expect(new Set(ahead.map(({ site }) => site))).toEqual(new Set(['PIPIT']));
    expect(ahead.every((read) => read.readAt - read.deliveredAt > 5 * 60_000)).toBe(true);
  });

  it('has two sites send hours late, two with a clock behind, and all of them at work', () => {
    const lateBy = (code: string) =>
      readsOf(whole).filter((read) => read.site === code && read.deliveredAt - read.readAt > HOUR);
    expect(lateBy('QUERN').length).toBeGreaterThan(0);
    const late = world.sites.filter(({ code }) => lateBy(code).length > 0).map(({ code }) => code);
    expect(late.sort()).toEqual(['LINNET', 'QUERN']);
    for (const code of ['MARTEN', 'PIPIT']) {
      const behind = readsOf(whole).filter(
        ({ site, readAt, deliveredAt }) => site === code && readAt < deliveredAt,
      );
      expect(behind.length).toBeGreaterThan(0);
      expect(behind.every((read) => read.deliveredAt - read.readAt > 40_000)).toBe(true);
    }
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

  it('come from every antenna of the region, and from one that nobody has entered', () => {
    const known = new Set(
      world.readPoints.flatMap(({ site, antennas }) =>
        antennas.map(({ number }) => `${site} ${number}`),
      ),
    );
    const heard = new Set(reads.map(({ site, antenna }) => `${site} ${antenna}`));
    expect(heard).toEqual(known.add('SORREL 9'));
  });

  it('show tags that name the unit they are on, but for garbled ones, train numbers and test tags', () => {
    const owners = new Map(
      world.units.flatMap((unit) => unit.tags.map((tag) => [tag.value, unit] as const)),
    );
    const strange = new Map<string, number>();
    for (const { tag } of reads) {
      if (!owners.has(tag)) strange.set(tag, (strange.get(tag) ?? 0) + 1);
    }
    const verdicts = [...strange.keys()].map((tag) => resolveTag(tag));
    const holds = verdicts.map((tag) => (tag.kind === 'hold' ? tag.hold : 'names a unit'));
    expect(new Set(holds)).toEqual(new Set(['check-failed', 'not-equipment', 'undecodable-tag']));
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
    expect(cars.filter(({ tags: ofCar }) => ofCar.every(({ dead }) => dead))).toHaveLength(6);
    const living = sides.filter(({ dead }) => !dead);
    const heardShare = living.filter(({ value }) => heard.has(value)).length / living.length;
    expect(heardShare).toBeGreaterThan(0.98);
  });

  it('silence one site for a whole day, and no other', () => {
    const truth = truthBetween(from, from + 45 * DAY);
    const days = (values: { site: string; at: number }[]) =>
      new Set(values.map(({ site, at }) => `${site} ${Math.floor(at / DAY)}`));
    const heard = days(reads.map(({ site, readAt }) => ({ site, at: readAt })));
    const regular = truth.filter(({ site }) => !branch.includes(site));
    const silent = [...days(regular)].filter((day) => !heard.has(day));
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
