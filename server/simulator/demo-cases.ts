import type { DemoCase } from '../contract/demo-cases.js';
import { unitNamed } from './traffic/branch/round.js';
import { branchCars } from './world/branch-cars.js';
import { sites } from './world/sites.js';

type Row = [
  id: string,
  title: string,
  says: string,
  cars: string[],
  site: string | null,
  screen?: DemoCase['screen'],
];

const rows: Row[] = [
  [
    'late',
    'Reads that come late',
    'The link of Linnet Line is down for two hours of every four days. Then all its reads come at once, after the car was read further on, and take their place in its journey.',
    [branchCars.late],
    'LINNET',
  ],
  [
    'slow-clock',
    'A clock that is 40\u00a0s behind',
    'Passes at Pipit Storage Tracks and at Marten Falls Line show 40\u00a0s early.',
    [branchCars.history],
    'PIPIT',
  ],
  [
    'clock-ahead',
    'A clock that ran ahead',
    'Every sixteen days the clock at Pipit Storage Tracks is 9 minutes ahead for an hour. What was read then is set aside until somebody releases it.',
    [],
    'PIPIT',
    'setAside',
  ],
  [
    'parallel',
    'Two trains that meet on two tracks',
    'At Sorrel Yard antennas of each west track hear some of the train on the other. Such a read is kept as heard from the next track, and moves nothing.',
    [branchCars.missedExit, branchCars.reported],
    'SORREL',
  ],
  [
    'beam',
    'A car that stands in the beam',
    'For three hours of every four days it stands before an antenna of Sorrel Yard and is read every half minute: one visit, no crossing.',
    [branchCars.inTheBeam],
    'SORREL',
  ],
  [
    'beside',
    'A car beside the track',
    'A stray beam reads it again and again where it stands at Sorrel Yard: kept, shown, and no movement.',
    [branchCars.beside],
    'SORREL',
  ],
  [
    'unequipped',
    'A lead that is not equipped',
    'Sorrel Yard has no reader at its east lead. The car was read in from the west and next at Rowan Quarry, so its departure is inferred.',
    [branchCars.missedExit],
    'SORREL',
  ],
  [
    'dead-antennas',
    'Antennas that were dead',
    'Every eight days the antennas of Rowan Quarry hear nothing for half a day: wheels went by, no tags. Its departure is inferred from where it is read next.',
    [branchCars.deadAntennas],
    'ROWAN',
  ],
  [
    'tag-moved',
    'A tag moved to another car',
    'The tag that spells QTKX 40401 goes to and fro between two cars. The register has the date of its last move, so its reads count for the car that wears it.',
    [branchCars.lent.from, branchCars.lent.to],
    null,
  ],
  [
    'tag-conflict',
    'A tag moved, and nobody told the register',
    'The right tag of the first car is on the second. Minutes after the first came to Sorrel Yard it is read at Pipit, 32 rail miles away: no train could have joined these, so it does not move.',
    [branchCars.robbed, branchCars.impostor],
    'PIPIT',
    'doubts',
  ],
  [
    'runs-round',
    'An engine that runs round its train',
    'At Rowan Quarry it goes out over the reader alone and comes back: no departure.',
    [branchCars.engine],
    'ROWAN',
  ],
  [
    'stops',
    'A train that stops over the reader',
    'The first train stands over the reader of Rowan Quarry for more than two minutes and goes on: one pass.',
    [branchCars.stopsOver],
    'ROWAN',
  ],
  [
    'one-antenna',
    'One antenna, direction from history',
    'Pipit Storage Tracks has a single antenna. Which way a train went follows from where its cars were read before and after.',
    [branchCars.history],
    'PIPIT',
  ],
  [
    'trailers',
    'Trailers and boxes',
    'Trailers of the railroad ride on flat cars between Pipit and Rowan; boxes ride on well cars everywhere.',
    [branchCars.trailer, branchCars.box],
    null,
  ],
  [
    'reported',
    'A place that no reader sees',
    'At Bryony Kiln there is no reader. The railroad reports what comes and goes there.',
    [branchCars.reported],
    'BRYONY',
  ],
  [
    'by-hand',
    'A car seen by eye',
    'Both of its tags are dead. A clerk of Alder Bend Yard writes down when it is there and when it is gone.',
    [branchCars.byHand],
    'ALDER',
  ],
  [
    'set-aside',
    'Reads set aside, for each reason',
    'An antenna at Sorrel Yard that nobody entered, EPCs that nobody registered, wrong check sums, train numbers and test tags that name no car, a worn tag that cannot be read out, a clock ahead, and what a reader kept in its memory for 500 days.',
    [],
    null,
    'setAside',
  ],
];

/** What the demo shows of a railway's troubles, and the cars and sites that show it. */
export const demoCases: DemoCase[] = rows.map(([id, title, says, cars, site, screen = null]) => ({
  id,
  title,
  says,
  cars: cars.map((compact) => {
    const { identity } = unitNamed(compact);
    return { unitId: identity.compact, display: identity.display };
  }),
  site: siteNamed(site),
  screen,
}));

function siteNamed(code: string | null): DemoCase['site'] {
  const site = sites.find((each) => each.code === code);
  return site ? { code: site.code, name: site.name } : null;
}
