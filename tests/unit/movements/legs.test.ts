import { describe, expect, test } from 'vitest';
import type { Configuration } from '../../../server/domain/movements/configuration.js';
import { NetworkBuilder, at } from '../../support/network-builder.js';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const CAR = 'QTKX1';
const world = twoYards('sensors');
const registered: Configuration = {
  ...world.configuration,
  units: [{ unit: CAR, kind: 'car', registered: true }],
  identities: [{ value: CAR, unit: CAR, validFrom: null, validTo: null }],
};

/** Yards A and B with a lead each, a junction between them, and line points off it. */
function forked() {
  const network = new NetworkBuilder();
  const yardA = network.site('QA');
  const yardB = network.site('QB');
  const junction = network.site('QJ', { kind: 'line' });
  const branch = network.site('QS', { kind: 'line' });
  const leadA = network.readPoint(yardA, 'sensors', { decreasingPlace: at(yardA) });
  const leadB = network.readPoint(yardB, 'sensors', { increasingPlace: at(yardB) });
  const onBranch = network.readPoint(branch, 'sensors');
  network.route(yardA, junction, 40_000).route(junction, yardB, 60_000);
  return { network, yardA, yardB, junction, branch, leadA, leadB, onBranch };
}

describe('legs', () => {
  test('join consecutive stays, from departure to arrival, over the rails between', () => {
    const track = new Trackside(world.configuration)
      .cross(world.leadA, CAR, '08:00', 'decreasing')
      .cross(world.leadA, CAR, '10:00', 'increasing')
      .cross(world.line, CAR, '11:00', 'increasing')
      .cross(world.leadB, CAR, '14:00', 'increasing')
      .cross(world.gate, CAR, '20:00', 'increasing');
    expect(track.legs(CAR)).toEqual([
      {
        fromSiteId: world.yardA,
        fromFirstSeenAt: time('08:00'),
        toSiteId: world.yardB,
        toFirstSeenAt: time('14:00'),
        departedAt: time('10:00'),
        arrivedAt: time('14:00'),
        railMetres: 100_000,
        estimated: false,
      },
      {
        fromSiteId: world.yardB,
        fromFirstSeenAt: time('14:00'),
        toSiteId: world.plant,
        toFirstSeenAt: time('20:00'),
        departedAt: time('20:00'),
        arrivedAt: time('20:00'),
        railMetres: 2_000,
        estimated: false,
      },
    ]);
  });

  test('go over the line points where the car was seen, not the shortest way', () => {
    const { network, junction, branch, leadA, leadB, onBranch } = forked();
    network.route(junction, branch, 15_000);
    const track = new Trackside(network.build())
      .cross(leadA, CAR, '10:00', 'increasing')
      .cross(onBranch, CAR, '12:00', 'increasing')
      .cross(leadB, CAR, '16:00', 'increasing');
    // 40 + 15 km out to the branch, 15 + 60 km from there.
    expect(track.legs(CAR)).toMatchObject([{ railMetres: 130_000, estimated: false }]);
  });

  test.each([
    [110_000, true],
    [110_001, false],
  ])('are estimated where a second way is within a tenth: %d m beside 100,000', (metres, guess) => {
    const { network, yardA, yardB, leadA, leadB } = forked();
    network.route(yardA, yardB, metres);
    const track = new Trackside(network.build())
      .cross(leadA, CAR, '10:00', 'increasing')
      .cross(leadB, CAR, '16:00', 'increasing');
    expect(track.legs(CAR)).toMatchObject([{ railMetres: 100_000, estimated: guess }]);
  });

  test('count no miles on water', () => {
    const { network, yardB, leadA, leadB } = forked();
    const port = network.site('QW', { kind: 'port' });
    network.route(yardB, port, 25_000, 'water');
    const quay = network.readPoint(port, 'sensors', { increasingPlace: at(port) });
    const track = new Trackside(network.build())
      .cross(leadA, CAR, '10:00', 'increasing')
      .cross(quay, CAR, '20:00', 'increasing')
      .cross(leadB, CAR, '3T20:00', 'increasing');
    expect(track.legs(CAR).map(({ railMetres }) => railMetres)).toEqual([100_000, 0]);
  });

  test('count no miles for a box of which nobody knows what it rode on', () => {
    const track = new Trackside(world.configuration)
      .cross(world.leadA, 'ZQXU3054381', '10:00', 'increasing')
      .cross(world.leadB, 'ZQXU3054381', '16:00', 'increasing');
    expect(track.legs('ZQXU3054381')).toMatchObject([{ railMetres: 0, arrivedAt: time('16:00') }]);
  });

  test('keep an arrival that is known although the departure is inferred', () => {
    const track = new Trackside(world.configuration)
      .cross(world.leadA, CAR, '08:00', 'decreasing')
      .cross(world.leadB, CAR, '18:00', 'increasing');
    expect(track.legs(CAR)).toMatchObject([
      { departedAt: time('14:40'), arrivedAt: time('18:00') },
    ]);
  });
});

describe('time', () => {
  test('a change to daylight saving adds no hour to a stay and takes none', () => {
    // Clocks in the United States went forward on 8 March 2026 at 02:00, in Europe on 29 March.
    const track = new Trackside(world.configuration);
    for (const day of [7, 28]) {
      track.cross(world.leadA, CAR, `${day}T20:00`, 'decreasing');
      track.cross(world.leadA, CAR, `${day + 1}T20:00`, 'increasing');
    }
    const dwellMs = track.stays(CAR).map((stay) => (stay.departedAt ?? 0) - (stay.arrivedAt ?? 0));
    expect(dwellMs).toEqual([24 * 3_600_000, 24 * 3_600_000]);
  });

  test('two sightings in one millisecond count in the order of site codes', () => {
    const network = new NetworkBuilder();
    const late = network.site('QZ');
    const early = network.site('QA');
    const atLate = network.readPoint(late, 'sensors', { decreasingPlace: at(late) });
    const atEarly = network.readPoint(early, 'sensors', { decreasingPlace: at(early) });
    const track = new Trackside(network.build())
      .cross(atLate, CAR, '10:00', 'decreasing')
      .cross(atEarly, CAR, '10:00', 'decreasing');
    expect(track.stays(CAR).map(({ siteId }) => siteId)).toEqual([early, late]);
    expect(track.lastSeen(CAR)).toMatchObject({ siteId: late, state: 'onHand' });
  });
});

describe('last seen', () => {
  test('on hand: where it stands, since when, and when that is too long', () => {
    const track = new Trackside(world.configuration).cross(world.leadA, CAR, '08:00', 'decreasing');
    expect(track.lastSeen(CAR)).toEqual({
      at: time('08:00'),
      state: 'onHand',
      siteId: world.yardA,
      track: null,
      readPointId: world.leadA.id,
      pass: { readPointId: world.leadA.id, startedAt: time('08:00'), ordinal: 0 },
      basis: 'read',
      direction: 'decreasing',
      staySiteId: world.yardA,
      stayFirstSeenAt: time('08:00'),
      arrivedAt: time('08:00'),
      quietAt: null,
      limitAt: time('4T08:00'),
    });
  });

  test('en route: where it left, and when it becomes quiet', () => {
    const track = new Trackside(registered).cross(world.leadA, CAR, '08:00', 'increasing');
    expect(track.lastSeen(CAR)).toMatchObject({
      state: 'enRoute',
      siteId: world.yardA,
      arrivedAt: null,
      quietAt: time('5T08:00'),
      limitAt: null,
    });
  });

  test('en route past a line point: there', () => {
    const track = new Trackside(registered)
      .cross(world.leadA, CAR, '08:00', 'increasing')
      .cross(world.line, CAR, '09:30', 'increasing');
    expect(track.lastSeen(CAR)).toMatchObject({
      state: 'enRoute',
      at: time('09:30'),
      readPointId: world.line.id,
      staySiteId: world.yardA,
      quietAt: time('5T09:30'),
    });
  });

  test('a stranger is never quiet: nobody waits for it', () => {
    const track = new Trackside(world.configuration).cross(world.leadA, CAR, '08:00', 'increasing');
    expect(track.lastSeen(CAR)).toMatchObject({ state: 'enRoute', quietAt: null });
  });

  test('how long is too long counts from the arrival where that is known', () => {
    const track = new Trackside(world.configuration)
      .cross(world.line, CAR, '08:00', 'decreasing')
      .read(world.leadA, 0, CAR, '10:00')
      .cross(world.leadA, CAR, '11:00', 'decreasing');
    expect(track.lastSeen(CAR)).toMatchObject({
      stayFirstSeenAt: time('10:00'),
      arrivedAt: time('11:00'),
      limitAt: time('4T11:00'),
    });
  });

  test('is the last read of a passage, not its first', () => {
    const track = new Trackside(world.configuration).read(world.leadA, 0, CAR, '08:00:00');
    track.read(world.leadA, 0, CAR, '08:00:45');
    expect(track.lastSeen(CAR)).toMatchObject({ at: time('08:00:45') });
  });

  test.each(['QLR1', 'QEOT1'])('%s never becomes quiet and stands as long as it likes', (unit) => {
    const track = new Trackside(world.configuration).cross(
      world.leadA,
      unit,
      '08:00',
      'increasing',
    );
    expect(track.lastSeen(unit)).toMatchObject({ state: 'enRoute', quietAt: null });
    track.cross(world.leadB, unit, '18:00', 'increasing');
    expect(track.lastSeen(unit)).toMatchObject({ state: 'onHand', limitAt: null });
  });
});
