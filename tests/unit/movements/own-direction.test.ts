import { describe, expect, test } from 'vitest';
import type { PassMember } from '../../../server/domain/movements/passes.js';
import {
  NetworkBuilder,
  at,
  type BuiltPoint,
  type Equipped,
} from '../../support/network-builder.js';
import { Trackside } from '../../support/trackside.js';

function lead(equipped: Equipped): { point: BuiltPoint; track: Trackside } {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const point = network.readPoint(yard, equipped, { decreasingPlace: at(yard) });
  return { point, track: new Trackside(network.build()) };
}

function only(track: Trackside, point: BuiltPoint): PassMember {
  const members = track.passes(point).flatMap((pass) => pass.members);
  expect(members).toHaveLength(1);
  return members[0] as PassMember;
}

describe('direction from wheel sensors', () => {
  test.each([
    ['10:00:10.000', 'crossing', 'increasing'],
    ['10:00:09.999', 'presence', null],
  ])(
    'a record reaches ten seconds: read at %s before one from 10:00:20',
    (clock, role, direction) => {
      const { point, track } = lead('sensors');
      track.read(point, 0, 'QTKX1', clock).wheels(point, '10:00:20', '10:00:30', 'increasing');
      expect(only(track, point)).toMatchObject({ role, direction });
    },
  );

  test('the record that covers the last read counts where none covers the first', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 0, 'QTKX1', '10:00:50');
    track.wheels(point, '10:00:45', '10:01:20', 'decreasing', 5.5);
    expect(only(track, point)).toMatchObject({ role: 'crossing', direction: 'decreasing' });
    expect(only(track, point).passage.own).toMatchObject({ basis: 'sensors', speedKmh: 5.5 });
  });

  test('a record that came late turns a presence into a crossing', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00');
    expect(only(track, point)).toMatchObject({ role: 'presence', direction: null });
    track.wheels(point, '09:59:58', '10:00:02', 'increasing');
    expect(only(track, point)).toMatchObject({ role: 'crossing', direction: 'increasing' });
  });

  test('a record without direction tells nothing', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00').wheels(point, '09:59:58', '10:00:02', null);
    expect(only(track, point)).toMatchObject({ role: 'presence', direction: null });
  });

  test('sensors count before antennas', () => {
    const { point, track } = lead('offsets');
    track.cross(point, 'QTKX1', '10:00:00', 'decreasing');
    track.wheels(point, '09:59:58', '10:00:03', 'increasing');
    expect(only(track, point)).toMatchObject({ direction: 'increasing', basis: 'sensors' });
  });
});

describe('direction from antennas', () => {
  test('one tag at two offsets of one side tells direction and speed', () => {
    const { point, track } = lead('offsets');
    track.cross(point, 'QTKX1', '10:00:00', 'decreasing');
    expect(only(track, point)).toMatchObject({ direction: 'decreasing', basis: 'antennas' });
    // 6 metres in one second.
    expect(only(track, point).passage.own.speedKmh).toBeCloseTo(21.6, 6);
  });

  test('the middle of the reads of an antenna is its point, not the first of them', () => {
    const { point, track } = lead('offsets');
    // At -3 m from second 0 to 10 (middle 5), at +3 m at second 4: decreasing.
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 0, 'QTKX1', '10:00:09.500');
    track.read(point, 2, 'QTKX1', '10:00:04');
    expect(only(track, point)).toMatchObject({ direction: 'decreasing' });
  });

  test('mixing the sides gives no direction: the two tags sit metres apart along the car', () => {
    const { point, track } = lead('offsets');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 3, 'QTKX1', '10:00:02', 'right');
    expect(only(track, point)).toMatchObject({ role: 'presence', direction: null });
  });

  test('one tag at antennas of both sides gives no direction either', () => {
    const { point, track } = lead('offsets');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 3, 'QTKX1', '10:00:02');
    expect(only(track, point)).toMatchObject({ role: 'presence', direction: null });
  });

  test('two tags at two offsets of one side give no direction', () => {
    const { point, track } = lead('offsets');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 2, 'QTKX1', '10:00:02', 'right');
    expect(only(track, point)).toMatchObject({ role: 'presence', direction: null });
  });

  test('two tags at one offset give no direction', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 1, 'QTKX1', '10:00:02', 'right');
    expect(only(track, point)).toMatchObject({ role: 'presence', direction: null });
  });
});

describe('returned: it came and went back', () => {
  test('first and last read under opposite wheel records', () => {
    const { point, track } = lead('sensors');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 0, 'QTKX1', '10:00:50');
    track.wheels(point, '09:59:58', '10:00:02', 'increasing');
    track.wheels(point, '10:00:48', '10:00:55', 'decreasing');
    expect(only(track, point)).toMatchObject({ role: 'returned', direction: null });
  });

  test.each([
    ['10:00:10.000', 'returned'],
    ['10:00:09.999', 'crossing'],
  ])('back at the first offset after the other, away until %s: %s', (clock, role) => {
    const { point, track } = lead('offsets');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 2, 'QTKX1', '10:00:08');
    track.read(point, 0, 'QTKX1', clock);
    expect(only(track, point)).toMatchObject({ role });
  });

  test.each([
    ['QTKX1', '10:00:10.000', 'returned'],
    ['QTKX1', '10:00:09.999', 'presence'],
    ['QEOT1', '10:00:10.000', 'presence'],
  ])('with one offset and no sensors by the tags: %s until %s', (unit, clock, role) => {
    const network = new NetworkBuilder();
    const yard = network.site('QA');
    const point = network.readPoint(yard, 'sensors', { decreasingPlace: at(yard) });
    const track = new Trackside(network.build());
    track.read(point, 0, unit, '10:00:00').read(point, 1, unit, '10:00:05', 'right');
    track.read(point, 0, unit, clock);
    expect(only(track, point)).toMatchObject({ role });
  });

  test('it moves nothing: the stay goes on', () => {
    const { point, track } = lead('offsets');
    track.cross(point, 'QTKX1', '08:00:00', 'decreasing');
    track.read(point, 0, 'QTKX1', '10:00:00').read(point, 2, 'QTKX1', '10:00:08');
    track.read(point, 0, 'QTKX1', '10:00:20');
    expect(track.stays('QTKX1')).toMatchObject([{ departedAt: null, excursions: 0 }]);
  });
});
