import { expect, test } from 'vitest';
import { canonicalDump } from '../../../server/domain/movements/canonical-dump.js';
import { Network } from '../../../server/domain/movements/configuration.js';
import type { Ledger } from '../../../server/domain/movements/history-of.js';
import { dumpOf, rowsOf } from '../../support/dump-history.js';
import { expectSameHistory } from '../../support/expect-same-history.js';
import { RunningHistory } from '../../support/running-history.js';
import { Trackside } from '../../support/trackside.js';
import { twoYards, type TwoYards } from '../../support/two-yards.js';

/** Takes portion after portion; after each, history is that of all so far. */
function takeEach(world: TwoYards, portions: ((track: Trackside) => Trackside)[]): void {
  const { configuration } = world;
  const running = new RunningHistory(configuration);
  const all = new Trackside(configuration);
  for (const report of portions) {
    running.take(report(new Trackside(configuration)).ledger);
    const whole: Ledger = report(all).ledger;
    const dump = canonicalDump(new Network(configuration), rowsOf(running.history), String);
    expectSameHistory(dump, dumpOf(whole, configuration));
    expect(dump).not.toEqual([]);
  }
}

test('a pass that a later car cut off is no clean start: an earlier one may move the cut', () => {
  const world = twoYards('offsets');
  const { leadA } = world;
  takeEach(world, [
    // The gap before car 2 is the widest, so it begins the pass that turns back.
    (track) =>
      track
        .cross(leadA, 'QTKX1', '10:00:00', 'increasing')
        .read(leadA, 0, 'QTKX2', '10:02:40')
        .read(leadA, 0, 'QTKX3', '10:04:00')
        .read(leadA, 0, 'QTKX4', '10:05:00')
        .cross(leadA, 'QTKX6', '10:06:20', 'decreasing'),
    (track) => track.cross(leadA, 'QTKX5', '10:05:30', 'increasing'),
  ]);
});

test('what a late wheel record says of one visit bears on another, an hour and a train before', () => {
  const world = twoYards('sensors');
  const { leadA } = world;
  takeEach(world, [
    (track) =>
      track
        .read(leadA, 0, 'QTKX1', '10:00:00')
        .cross(leadA, 'QTKX2', '10:10:00', 'increasing')
        .cross(leadA, 'QTKX3', '10:20:00', 'increasing')
        .read(leadA, 0, 'QTKX1', '10:30:00'),
    (track) => track.wheels(leadA, '10:29:59', '10:30:01', 'increasing'),
  ]);
});

test('a late read lets a car next to it in time no longer stand alone beside the track', () => {
  const world = twoYards('sensors');
  const { leadA } = world;
  takeEach(world, [
    (track) =>
      track
        .read(leadA, 0, 'QTKX1', '10:00:00')
        .cross(leadA, 'QTKX2', '10:10:00', 'increasing')
        .read(leadA, 0, 'QTKX1', '10:30:00'),
    (track) => track.read(leadA, 0, 'QTKX5', '10:00:59'),
    (track) => track.read(leadA, 0, 'QTKX6', '10:29:01'),
  ]);
});

test('cars of a late pass change how those they came with are thought to have left', () => {
  const world = twoYards('offsets');
  const { leadA, leadB } = world;
  takeEach(world, [
    (track) =>
      track
        .cross(leadA, 'QTKX1', '08:00:00', 'decreasing')
        .cross(leadB, 'QTKX1', '20:00:00', 'increasing')
        .cross(leadB, 'QTKX2', '20:00:10', 'increasing'),
    (track) => track.cross(leadA, 'QTKX2', '12:00:00', 'increasing'),
    (track) => track.cross(leadB, 'QTKX3', '20:00:20', 'increasing'),
  ]);
});
