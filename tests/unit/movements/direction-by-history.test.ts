import { describe, expect, test } from 'vitest';
import { at, NetworkBuilder } from '../../support/network-builder.js';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

// One antenna: its reads tell no direction. Yard A - 40 km - line point - 60 km - yard B.
const world = twoYards('single');
const { leadA, leadB, line } = world;
const CARS = ['QTKX1', 'QTKX2', 'QTKX3', 'QTKX4'] as const;
const [CAR] = CARS;

function trackside(): Trackside {
  return new Trackside(world.configuration);
}

/** The cars go by one after the other, five seconds apart. */
function train(
  track: Trackside,
  point: typeof leadA,
  clock: string,
  cars: readonly string[] = CARS,
): Trackside {
  cars.forEach((car, index) => {
    const instant = new Date(time(clock) + index * 5_000).toISOString().slice(8, 23);
    track.read(point, 0, car, instant);
  });
  return track;
}

const directions = (track: Trackside, point: typeof leadA) =>
  track.passes(point).map((pass) => [pass.direction, pass.basis]);

describe('direction by history', () => {
  test('a train seen at one yard and then at the other left the first and entered the second', () => {
    const track = train(train(trackside(), leadA, '08:00'), leadB, '14:00');
    expect(directions(track, leadA)).toEqual([['increasing', 'history']]);
    expect(directions(track, leadB)).toEqual([['increasing', 'history']]);
    expect(track.stays(CAR)).toMatchObject([
      { siteId: world.yardA, departedAt: time('08:00'), departureBasis: 'read' },
      { siteId: world.yardB, arrivedAt: time('14:00'), arrivalBasis: 'read', departedAt: null },
    ]);
  });

  test('at a line point the side is where the way is shorter with the point cut out', () => {
    const track = train(train(trackside(), line, '10:00'), leadB, '13:00');
    expect(directions(track, line)).toEqual([['increasing', 'history']]);
    const back = train(train(trackside(), line, '10:00'), leadA, '13:00');
    expect(directions(back, line)).toEqual([['decreasing', 'history']]);
  });

  test('seen again at the same read point it went the other way', () => {
    const track = train(train(train(trackside(), line, '06:00'), leadA, '08:00'), leadA, '20:00');
    expect(directions(track, leadA)).toEqual([
      ['decreasing', 'history'],
      ['increasing', 'history'],
    ]);
  });

  test('nothing before and nothing after: unknown', () => {
    expect(directions(train(trackside(), leadA, '08:00'), leadA)).toEqual([[null, null]]);
  });

  test('two of four that can vote are too few, three are enough', () => {
    const two = train(train(trackside(), line, '06:00', CARS.slice(0, 2)), leadA, '08:00');
    expect(directions(two, leadA)).toEqual([[null, null]]);
    const three = train(train(trackside(), line, '06:00', CARS.slice(0, 3)), leadA, '08:00');
    expect(directions(three, leadA)).toEqual([['decreasing', 'history']]);
  });

  test('whoever was seen on both sides without crossing has no vote', () => {
    // It came from the line and is at the line again: it never went in.
    const track = trackside().read(line, 0, CAR, '06:00').read(leadA, 0, CAR, '08:00');
    expect(directions(track, leadA)).toEqual([['decreasing', 'history']]);
    track.read(line, 0, CAR, '10:00');
    expect(directions(track, leadA)).toEqual([[null, null]]);
  });

  test('a car that stands in the beam neither votes nor crosses by itself', () => {
    const track = trackside().read(line, 0, CAR, '06:00').stand(leadA, CAR, '08:00');
    expect(directions(track, leadA)).toEqual([[null, null]]);
    expect(track.passes(leadA)[0]?.members).toMatchObject([{ role: 'presence' }]);
  });

  test('three against two carry it, two against two do not', () => {
    const from = (inward: number, cars: readonly string[]) => {
      const track = train(trackside(), line, '06:00', cars.slice(0, inward));
      // The rest was in the yard: seen out on the line only afterwards.
      train(track, leadA, '08:00', cars);
      return train(track, line, '12:00', cars.slice(inward));
    };
    const five = [...CARS, 'QTKX5'];
    expect(directions(from(3, five), leadA)).toEqual([['decreasing', 'history']]);
    expect(directions(from(2, CARS), leadA)).toEqual([[null, null]]);
  });
});

describe('at a site with a lead that is not equipped', () => {
  function yard(equipped: boolean) {
    const network = new NetworkBuilder();
    const leads = [
      { name: 'North lead', equipped: true },
      { name: 'South lead', equipped },
    ];
    const site = network.site('QA', { leads });
    const lead = network.readPoint(site, 'single', { increasingPlace: at(site) });
    return { lead, track: new Trackside(network.build()) };
  }

  test.each([
    [false, '20:00:00.000', 'decreasing'],
    [false, '20:00:00.001', null],
    [true, '20:00:00.001', 'decreasing'],
  ])('equipped %s: what was known of it at 08:00 counts until %s', (equipped, clock, told) => {
    const { lead, track } = yard(equipped);
    // The way in is told by the car that is seen coming from the line next to it.
    track.wheels(lead, '08:00', '08:00', 'increasing').read(lead, 0, CAR, '08:00');
    track.read(lead, 0, CAR, clock);
    expect(track.passes(lead).at(-1)?.direction).toBe(told);
  });
});

describe('where there are two offsets', () => {
  const offsets = twoYards('offsets');

  test('one tag heard by one antenna has no vote: it may stand beside the track', () => {
    const track = new Trackside(offsets.configuration).cross(
      offsets.leadA,
      CAR,
      '08:00',
      'decreasing',
    );
    track.read(offsets.leadA, 0, CAR, '16:00');
    expect(track.passes(offsets.leadA).at(-1)).toMatchObject({ direction: null, basis: null });
    expect(track.stays(CAR)).toMatchObject([{ departedAt: null }]);
  });

  test('heard on both sides it has', () => {
    const track = new Trackside(offsets.configuration).cross(
      offsets.leadA,
      CAR,
      '08:00',
      'decreasing',
    );
    track.read(offsets.leadA, 0, CAR, '16:00').read(offsets.leadA, 1, CAR, '16:00:01', 'right');
    expect(track.passes(offsets.leadA).at(-1)?.direction).toBe('increasing');
  });
});
