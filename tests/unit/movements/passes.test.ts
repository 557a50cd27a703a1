import { describe, expect, test } from 'vitest';
import {
  NetworkBuilder,
  at,
  type BuiltPoint,
  type Equipped,
} from '../../support/network-builder.js';
import { time, Trackside } from '../../support/trackside.js';

function lead(equipped: Equipped = 'offsets'): { point: BuiltPoint; track: Trackside } {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const point = network.readPoint(yard, equipped, { decreasingPlace: at(yard) });
  return { point, track: new Trackside(network.build()) };
}

function unitsOf(track: Trackside, point: BuiltPoint) {
  return track.passes(point).map((pass) => pass.members.map(({ passage }) => passage.unit));
}

describe('passages', () => {
  test.each([
    ['10:01:00.000', 1],
    ['10:01:00.001', 2],
  ])('reads belong together up to the visit gap of 60 s: a read at %s', (clock, count) => {
    const { point, track } = lead('sensors');
    for (const instant of ['10:00:00', clock]) {
      track.read(point, 0, 'QTKX1', instant).read(point, 1, 'QTKX1', instant, 'right');
    }
    expect(track.passes(point).flatMap((pass) => pass.members)).toHaveLength(count);
  });

  test('a car that stopped between two offsets made one passage, with a direction', () => {
    const { point, track } = lead();
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 2, 'QTKX1', '10:30:00');
    const [pass, ...others] = track.passes(point);
    expect(others).toEqual([]);
    expect(pass?.members).toMatchObject([
      {
        role: 'crossing',
        direction: 'increasing',
        passage: { first: { at: time('10:00') }, lastAt: time('10:30'), readCount: 2 },
      },
    ]);
  });

  test('over half an hour apart they are two', () => {
    const { point, track } = lead();
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 2, 'QTKX1', '10:30:00.001');
    expect(unitsOf(track, point)).toEqual([['QTKX1'], ['QTKX1']]);
  });

  test('another unit between them keeps them apart', () => {
    const { point, track } = lead();
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 0, 'QTKX2', '10:05:00');
    track.read(point, 2, 'QTKX1', '10:10:00');
    const members = track.passes(point).flatMap((pass) => pass.members);
    expect(members.map(({ role }) => role)).toEqual(['presence', 'presence', 'presence']);
  });

  test('two passages that both know their direction stay apart', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.cross(point, 'QTKX1', '10:10:00', 'decreasing');
    expect(track.passes(point).map(({ direction }) => direction)).toEqual([
      'increasing',
      'decreasing',
    ]);
  });
});

describe('a pass ends at a gap', () => {
  // The first car's last read is at 10:00:01.
  test.each([
    ['10:03:01.000', 1],
    ['10:03:01.001', 2],
  ])('above 180 s: next car at %s', (clock, count) => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.cross(point, 'QTKX2', clock, 'increasing');
    expect(unitsOf(track, point)).toHaveLength(count);
  });

  // 6 m in 3 s is 7.2 km/h, in 2.7 s 8 km/h; the first car's last read is at 10:00:03.
  test.each([
    ['10:30:03.000', 3, 1],
    ['10:30:03.001', 3, 2],
    ['10:20:00.000', 2.7, 2],
  ])('not if it stopped over the reader: next car at %s, 6 m in %d s', (clock, seconds, count) => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing', 3);
    track.cross(point, 'QTKX2', clock, 'increasing', seconds);
    expect(unitsOf(track, point)).toHaveLength(count);
  });

  test('a stop is also possible where no speed is known', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 0, 'QTKX2', '10:20:00');
    expect(unitsOf(track, point)).toEqual([['QTKX1', 'QTKX2']]);
  });

  test.each([
    ['QTKX1', 'QLR1', 'increasing'],
    ['QEOT1', 'QTKX1', 'increasing'],
    ['QTKX1', 'QTKX2', 'decreasing'],
  ] as const)('a stop ends no train: %s, and later %s %s', (first, second, direction) => {
    const { point, track } = lead();
    track.cross(point, first, '10:00:00', 'increasing', 3);
    track.cross(point, second, '10:10:00', direction, 3);
    expect(unitsOf(track, point)).toEqual([[first], [second]]);
  });
});

describe('a pass ends under the gap', () => {
  test.each([
    ['10:00:21.000', 1],
    ['10:00:21.001', 2],
  ])('20 s after an end-of-train device: next car at %s', (clock, count) => {
    const { point, track } = lead();
    track.cross(point, 'QEOT1', '10:00:00', 'increasing');
    track.cross(point, 'QTKX2', clock, 'increasing');
    expect(unitsOf(track, point)).toHaveLength(count);
  });

  test.each([
    ['10:01:01.000', 1],
    ['10:01:01.001', 2],
  ])('60 s before a locomotive: at %s', (clock, count) => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.cross(point, 'QLR1', clock, 'increasing');
    expect(unitsOf(track, point)).toHaveLength(count);
  });

  test('at opposite directions, cut at the widest gap since the last known one', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.read(point, 0, 'QTKX2', '10:00:20');
    track.cross(point, 'QTKX3', '10:01:30', 'decreasing');
    expect(unitsOf(track, point)).toEqual([['QTKX1', 'QTKX2'], ['QTKX3']]);
    expect(track.passes(point).map(({ reversal }) => reversal)).toEqual([false, true]);
  });

  test('of two gaps of one width the earlier is cut', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.read(point, 0, 'QTKX2', '10:00:21');
    track.cross(point, 'QTKX3', '10:00:41', 'decreasing');
    expect(unitsOf(track, point)).toEqual([['QTKX1'], ['QTKX2', 'QTKX3']]);
  });

  test('at a reversal the passages next to the cut that know no direction are presence', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.read(point, 0, 'QTKX2', '10:00:10');
    track.read(point, 0, 'QTKX3', '10:01:20');
    track.cross(point, 'QTKX4', '10:01:30', 'decreasing');
    const roles = track.passes(point).map((pass) => pass.members.map(({ role }) => role));
    expect(roles).toEqual([
      ['crossing', 'presence'],
      ['presence', 'crossing'],
    ]);
  });

  test('when a unit comes again after another, cut at the widest gap since its earlier passage', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.cross(point, 'QTKX2', '10:00:10', 'increasing');
    track.cross(point, 'QTKX3', '10:01:20', 'increasing');
    track.cross(point, 'QTKX1', '10:01:30', 'increasing');
    expect(unitsOf(track, point)).toEqual([
      ['QTKX1', 'QTKX2'],
      ['QTKX3', 'QTKX1'],
    ]);
    expect(track.passes(point).map(({ reversal }) => reversal)).toEqual([false, false]);
  });
});

describe('within a pass', () => {
  test('a passage without own direction takes that of the pass', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'decreasing');
    track.read(point, 0, 'QTKX2', '10:00:05');
    track.cross(point, 'QTKX3', '10:00:10', 'decreasing');
    expect(track.passes(point)).toMatchObject([
      {
        direction: 'decreasing',
        basis: 'antennas',
        startedAt: time('10:00'),
        endedAt: time('10:00:11'),
        members: [{}, { role: 'crossing', direction: 'decreasing', basis: 'antennas' }, {}],
      },
    ]);
  });

  test('but not under no wheel record where the pass is known by sensors', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00').wheels(point, '10:00:00', '10:00:01', 'increasing');
    track.read(point, 0, 'QTKX2', '10:00:30');
    expect(track.passes(point)[0]?.members).toMatchObject([
      { passage: { unit: 'QTKX1' }, role: 'crossing' },
      { passage: { unit: 'QTKX2' }, role: 'presence', direction: null },
    ]);
  });

  test('its speed is the middle one of its passages', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing', 1);
    track.cross(point, 'QTKX2', '10:00:10', 'increasing', 2);
    track.cross(point, 'QTKX3', '10:00:20', 'increasing', 0.5);
    expect(track.passes(point)[0]?.speedKmh).toBe(21.6);
  });

  test('a car that stands in the beam reaches no further than a minute', () => {
    const { point, track } = lead('sensors');
    for (let minute = 10; minute < 20; minute += 1) {
      track.read(point, 0, 'QTKX1', `10:${minute}:00`);
    }
    track.read(point, 0, 'QTKX2', '10:14:30');
    track.wheels(point, '10:14:30', '10:14:31', 'increasing', 30);
    // It began at 10:10, so its pass reaches to 10:11; a fast car comes 210 s later.
    expect(track.passes(point).map(({ startedAt, endedAt }) => [startedAt, endedAt])).toEqual([
      [time('10:10'), time('10:11')],
      [time('10:14:30'), time('10:14:30')],
    ]);
  });

  test('two that start in one millisecond are told apart by their order', () => {
    const { point, track } = lead();
    track.cross(point, 'QTKX1', '10:00:00', 'increasing');
    track.cross(point, 'QTKX2', '10:00:00', 'decreasing');
    const told = track.passes(point).map((pass) => [pass.startedAt, pass.ordinal, pass.direction]);
    expect(told).toEqual([
      [time('10:00'), 0, 'increasing'],
      [time('10:00'), 1, 'decreasing'],
    ]);
  });
});
