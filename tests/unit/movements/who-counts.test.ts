import { expect, test } from 'vitest';
import { Network } from '../../../server/domain/movements/configuration.js';
import {
  directionByHistory,
  mayVote,
} from '../../../server/domain/movements/direction-by-history.js';
import { time, Trackside } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const { configuration, leadA } = twoYards('sensors');

test.each([
  ['sensors', 'decreasing'],
  ['antennas', 'decreasing'],
  ['history', null],
  [null, null],
] as const)('a later pass known by %s votes for %s', (basis, direction) => {
  const [firstAt, lastAt] = [time('12:00'), time('12:00')];
  const after = { readPointId: leadA.id, firstAt, lastAt, direction: 'increasing', basis } as const;
  const voter = { firstAt: time('10:00'), lastAt: time('10:00'), before: null, after };
  expect(directionByHistory(new Network(configuration), leadA.id, [voter])).toBe(direction);
});

test('a car that went back has no vote on where its train went', () => {
  const track = new Trackside(configuration).read(leadA, 0, 'QTKX1', '10:00:00');
  track.read(leadA, 0, 'QTKX1', '10:00:40').read(leadA, 0, 'QTKX2', '10:00:20');
  track.wheels(leadA, '09:59:59', '10:00:01', 'increasing');
  track.wheels(leadA, '10:00:39', '10:00:41', 'decreasing');
  const members = track.passes(leadA).flatMap((pass) => pass.members);
  const votes = members.map(({ role, passage: { unit, first, lastAt, visits } }) => [
    unit,
    role,
    mayVote({ role, firstAt: first.at, lastAt, visits }, false),
  ]);
  expect(votes).toContainEqual(['QTKX1', 'returned', false]);
  expect(votes).toContainEqual(['QTKX2', 'presence', true]);
});

test.each([0, 1])(
  'of two units that have a tag at once the later one wears it (order %i)',
  (turn) => {
    const worn = [
      { value: 'T', unit: 'QTKX1', validFrom: null, validTo: null },
      { value: 'T', unit: 'QTKX2', validFrom: time('10:00'), validTo: null },
    ];
    const tags = turn ? worn.toReversed() : worn;
    const network = new Network({ ...configuration, tags });
    expect(network.unitOfTag('T', time('09:59:59'))).toBe('QTKX1');
    expect(network.unitOfTag('T', time('10:00'))).toBe('QTKX2');
  },
);
