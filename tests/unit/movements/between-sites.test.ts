import { describe, expect, test } from 'vitest';
import { NetworkBuilder, at } from '../../support/network-builder.js';
import { Trackside, time } from '../../support/trackside.js';
import { twoYards } from '../../support/two-yards.js';

const world = twoYards('sensors');
const { leadB, gate, yardB, plant } = world;
const CAR = 'QTKX1';

/** In yard B since 08:00, over the gate into the plant at 10:00. */
function intoPlant(): Trackside {
  return new Trackside(world.configuration)
    .cross(leadB, CAR, '08:00', 'increasing')
    .cross(gate, CAR, '10:00', 'increasing');
}

describe('over a read point between two sites', () => {
  test('it leaves one and enters the other at the same instant', () => {
    expect(intoPlant().stays(CAR)).toMatchObject([
      {
        siteId: yardB,
        arrivedAt: time('08:00'),
        departedAt: time('10:00'),
        departureBasis: 'read',
      },
      { siteId: plant, arrivedAt: time('10:00'), arrivalBasis: 'read', departedAt: null },
    ]);
  });

  test('both are provisional while crossing back would strike them', () => {
    expect(intoPlant().stays(CAR)).toMatchObject([
      { departureFinalAt: time('11:00') },
      { arrivalFinalAt: time('11:00') },
    ]);
    const seenAgain = intoPlant().stand(gate, CAR, '10:30');
    expect(seenAgain.stays(CAR)).toMatchObject([
      { departureFinalAt: null },
      { arrivalFinalAt: null },
    ]);
  });

  test.each(['10:00:30', '11:00'])('back over it at %s strikes both: a drill', (back) => {
    const track = intoPlant().cross(gate, CAR, back, 'decreasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, arrivedAt: time('08:00'), departedAt: null, excursions: 0 },
    ]);
    expect(track.stays(CAR)).toHaveLength(1);
    expect(track.legs(CAR)).toEqual([]);
    expect(track.lastSeen(CAR)).toMatchObject({ siteId: yardB, at: time(back) });
  });

  test('back later than the drill time: it was in the plant', () => {
    const track = intoPlant().cross(gate, CAR, '11:00:00.001', 'decreasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, departedAt: time('10:00'), departureFinalAt: null },
      { siteId: plant, departedAt: time('11:00:00.001') },
      { siteId: yardB, arrivedAt: time('11:00:00.001'), arrivalBasis: 'read' },
    ]);
    expect(track.legs(CAR)).toMatchObject([{ railMetres: 2000 }, { railMetres: 2000 }]);
  });

  test('the second crossing of a struck pair begins no drill of its own', () => {
    const track = intoPlant()
      .cross(gate, CAR, '10:20', 'decreasing')
      .cross(gate, CAR, '10:40', 'increasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, arrivedAt: time('08:00'), departedAt: time('10:40') },
      { siteId: plant, arrivedAt: time('10:40'), arrivalFinalAt: time('11:40') },
    ]);
  });

  test('seen elsewhere in between, neither is struck', () => {
    const track = intoPlant()
      .cross(leadB, CAR, '10:30', 'increasing')
      .cross(gate, CAR, '10:50', 'decreasing');
    const stays = track.stays(CAR);
    expect(stays.slice(0, 2)).toMatchObject([
      { siteId: yardB, departedAt: time('10:00'), departureBasis: 'read' },
      { siteId: plant, arrivedAt: time('10:00') },
    ]);
    expect(stays.at(-1)).toMatchObject({ siteId: yardB, arrivedAt: time('10:30') });
  });

  test('a drill as the first sighting ever: it was there, since when nobody knows', () => {
    const track = new Trackside(world.configuration)
      .cross(gate, CAR, '10:00', 'increasing')
      .cross(gate, CAR, '10:20', 'decreasing');
    expect(track.stays(CAR)).toMatchObject([
      {
        siteId: yardB,
        firstSeenAt: time('10:00'),
        arrivedAt: null,
        arrivalBounds: { earliest: null, latest: time('10:00') },
        departedAt: null,
      },
    ]);
  });

  test('a drill right after it had gone out to the line shows that it was back', () => {
    const track = new Trackside(world.configuration)
      .cross(leadB, CAR, '06:00', 'increasing')
      .cross(leadB, CAR, '08:00', 'decreasing')
      .cross(gate, CAR, '10:00', 'increasing')
      .cross(gate, CAR, '10:10', 'decreasing');
    expect(track.stays(CAR)).toMatchObject([
      { siteId: yardB, arrivedAt: time('06:00'), departedAt: null, excursions: 1 },
    ]);
  });
});

test('between two tracks of one site only the track changes', () => {
  const network = new NetworkBuilder();
  const yard = network.site('QA');
  const entry = network.readPoint(yard, 'sensors', { decreasingPlace: at(yard, 'lead') });
  const hump = network.readPoint(yard, 'sensors', {
    decreasingPlace: at(yard, 'R1'),
    increasingPlace: at(yard, 'C7'),
  });
  const track = new Trackside(network.build())
    .cross(entry, CAR, '08:00', 'decreasing')
    .cross(hump, CAR, '09:00', 'increasing');
  expect(track.stays(CAR)).toMatchObject([
    { arrivedAt: time('08:00'), departedAt: null, track: 'C7', lastSeenAt: time('09:00') },
  ]);
  track.cross(hump, CAR, '10:00', 'decreasing');
  expect(track.stays(CAR)).toMatchObject([{ departedAt: null, track: 'R1', excursions: 0 }]);
});
