import { describe, expect, test } from 'vitest';
import { at, NetworkBuilder, type Equipped } from '../../support/network-builder.js';
import { Trackside } from '../../support/trackside.js';

function lead(equipped: Equipped, passGapSeconds = 180) {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const point = network.readPoint(yard, equipped, { decreasingPlace: at(yard), passGapSeconds });
  const track = new Trackside(network.build());
  const units = () =>
    track.passes(point).map((pass) => pass.members.map(({ passage }) => passage.unit));
  return { point, track, units };
}

describe('a stop over the reader', () => {
  test('was none where the train went fast before it', () => {
    const { point, track, units } = lead('offsets');
    track.cross(point, 'QTKX1', '10:00:00', 'increasing', 1);
    track.cross(point, 'QTKX2', '10:20:00', 'increasing', 3);
    expect(units()).toEqual([['QTKX1'], ['QTKX2']]);
  });

  test('was none where the train goes fast after it', () => {
    const { point, track, units } = lead('offsets');
    track.cross(point, 'QTKX1', '10:00:00', 'increasing', 3);
    track.cross(point, 'QTKX2', '10:20:00', 'increasing', 1);
    expect(units()).toEqual([['QTKX1'], ['QTKX2']]);
  });

  test('ends the pass where the next car goes the other way, though it stopped longer before', () => {
    const { point, track, units } = lead('offsets');
    track.cross(point, 'QTKX1', '10:00:00', 'increasing', 3);
    track.read(point, 0, 'QTKX2', '10:20:00');
    track.cross(point, 'QTKX3', '10:25:00', 'decreasing', 3);
    expect(units()).toEqual([['QTKX1', 'QTKX2'], ['QTKX3']]);
  });

  // Where trains follow closely the gap is short; then these two are under their own limits.
  test('ends at an end-of-train device, also where it is short', () => {
    const { point, track, units } = lead('offsets', 5);
    track.cross(point, 'QEOT1', '10:00:00', 'increasing', 3);
    track.cross(point, 'QTKX1', '10:00:15', 'increasing', 3);
    expect(units()).toEqual([['QEOT1'], ['QTKX1']]);
  });

  test('ends before a locomotive, also where it is short', () => {
    const { point, track, units } = lead('offsets', 5);
    track.cross(point, 'QTKX1', '10:00:00', 'increasing', 3);
    track.cross(point, 'QLR1', '10:00:15', 'increasing', 3);
    expect(units()).toEqual([['QTKX1'], ['QLR1']]);
  });
});

test('next to a reversal a car under a record without direction goes with its pass: sensors saw it', () => {
  const { point, track } = lead('sensors');
  track.read(point, 0, 'QTKX1', '10:00:00').wheels(point, '10:00:00', '10:00:01', 'increasing');
  track.read(point, 0, 'QTKX2', '10:00:30').wheels(point, '10:00:30', '10:00:31', null);
  track.read(point, 0, 'QTKX3', '10:02:00').wheels(point, '10:02:00', '10:02:01', 'decreasing');
  expect(track.passes(point)).toMatchObject([
    { members: [{ role: 'crossing' }, { role: 'crossing', direction: 'increasing' }] },
    { reversal: true, members: [{ role: 'crossing', direction: 'decreasing' }] },
  ]);
});

test('a pass is as fast as its middle passage, whichever comes first', () => {
  const { point, track } = lead('offsets');
  track.cross(point, 'QTKX1', '10:00:00', 'increasing', 2);
  track.cross(point, 'QTKX2', '10:00:10', 'increasing', 1);
  track.cross(point, 'QTKX3', '10:00:20', 'increasing', 0.5);
  expect(track.passes(point)[0]?.speedKmh).toBe(21.6);
});
