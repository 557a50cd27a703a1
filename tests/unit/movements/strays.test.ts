import { describe, expect, test } from 'vitest';
import { at, NetworkBuilder } from '../../support/network-builder.js';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const CAR = 'QTKX1';

/** Two tracks side by side into one yard, two offsets on each. */
function twoTracks() {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const first = network.readPoint(yard, 'offsets', { increasingPlace: at(yard), track: '1' });
  const second = network.readPoint(yard, 'offsets', { increasingPlace: at(yard), track: '2' });
  const configuration = network.build();
  return { first, second, yard, track: new Trackside(configuration) };
}

describe('heard on two tracks at once', () => {
  test('a car belongs to the track where more was read of it', () => {
    const { first, second, track } = twoTracks();
    track.cross(first, CAR, '10:00:00', 'increasing').read(second, 0, CAR, '10:00:01');
    expect(track.passes(first).flatMap((pass) => pass.members)).toHaveLength(1);
    expect(track.passes(second)).toEqual([]);
    expect(track.strays(second)).toMatchObject([{ reason: 'parallel', passage: { unit: CAR } }]);
    expect(track.stays(CAR)).toMatchObject([{ track: null, arrivedAt: time('10:00') }]);
  });

  test('of equals the one that was read first', () => {
    const { first, second, track } = twoTracks();
    track.read(second, 0, CAR, '10:00:00').read(first, 0, CAR, '10:00:01');
    expect(track.strays(first)).toHaveLength(1);
    expect(track.strays(second)).toEqual([]);
  });

  test.each([
    ['10:00:31.000', 1],
    ['10:00:31.001', 0],
  ])('up to 30 s apart: the other track at %s', (clock, strays) => {
    const { first, second, track } = twoTracks();
    track.cross(first, CAR, '10:00:00', 'increasing').read(second, 0, CAR, clock);
    expect(track.strays(second)).toHaveLength(strays);
  });

  test('two meeting trains stay on their own tracks', () => {
    const { first, second, track } = twoTracks();
    track.cross(first, CAR, '10:00:00', 'increasing');
    track.cross(second, 'QTKX2', '10:00:05', 'decreasing');
    expect(track.passes(first)).toMatchObject([{ direction: 'increasing' }]);
    expect(track.passes(second)).toMatchObject([{ direction: 'decreasing' }]);
  });
});

describe('a car beside the track', () => {
  const world = twoYards('offsets');
  const { leadA } = world;
  const trackside = () => new Trackside(world.configuration);

  test('one tag at one antenna, and again within the hour: it moves nothing', () => {
    const track = trackside().read(leadA, 0, CAR, '10:00').read(leadA, 0, CAR, '11:00');
    expect(track.strays(leadA)).toMatchObject([{ reason: 'beside' }, { reason: 'beside' }]);
    expect(track.passes(leadA)).toEqual([]);
    expect(track.stays(CAR)).toEqual([]);
  });

  test('after more than an hour it is another sighting', () => {
    const track = trackside().read(leadA, 0, CAR, '10:00').read(leadA, 0, CAR, '11:00:00.001');
    expect(track.strays(leadA)).toEqual([]);
  });

  test('the same antenna in a passage with a direction tells nothing of it', () => {
    const track = trackside().read(leadA, 0, CAR, '10:00');
    track.cross(leadA, CAR, '10:30', 'increasing');
    expect(track.strays(leadA)).toEqual([]);
  });

  test('another tag, or another antenna, is no repetition', () => {
    const track = trackside().read(leadA, 0, CAR, '10:00').read(leadA, 1, CAR, '10:30', 'right');
    expect(track.strays(leadA)).toEqual([]);
  });

  test('a train that goes by in between is not cut by it', () => {
    const track = trackside().read(leadA, 0, CAR, '10:00:05');
    track.cross(leadA, 'QTKX2', '10:00:00', 'increasing');
    track.cross(leadA, 'QTKX3', '10:00:08', 'increasing').read(leadA, 0, CAR, '10:20');
    expect(track.passes(leadA)).toMatchObject([{ members: [{}, {}] }]);
    expect(track.strays(leadA)).toHaveLength(2);
  });

  test('one antenna alone cannot tell it from a train', () => {
    const single = twoYards('single');
    const track = new Trackside(single.configuration).read(single.leadA, 0, CAR, '10:00');
    track.read(single.leadA, 0, CAR, '10:30');
    expect(track.strays(single.leadA)).toEqual([]);
  });

  describe('where wheels are counted', () => {
    const sensed = twoYards('sensors');
    const point = sensed.leadA;
    const twice = () =>
      new Trackside(sensed.configuration).read(point, 0, CAR, '10:00').read(point, 0, CAR, '10:30');

    test('under no record, and alone', () => {
      expect(twice().strays(point)).toHaveLength(2);
    });

    test('a record over it makes it one of a train', () => {
      const track = twice().wheels(point, '09:59', '10:01', null);
      expect(track.strays(point)).toMatchObject([{ passage: { first: { at: time('10:30') } } }]);
    });

    test.each([
      ['10:01:00.000', 1],
      ['10:01:00.001', 2],
    ])('another car at %s, more than 60 s away or not', (clock, strays) => {
      expect(twice().read(point, 0, 'QTKX2', clock).strays(point)).toHaveLength(strays);
    });
  });
});
