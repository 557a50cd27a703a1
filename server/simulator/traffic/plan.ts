import { OUTSIDE } from '../world/read-points.js';

/**
 * A train that goes out and comes back over the same path, week after week. `sets` locomotive
 * sets take turns, so that each is home again before it is due.
 */
export interface Turn {
  id: string;
  carries: 'cars' | 'boxes' | 'strangers';
  /** Days of the UTC week on which it leaves its origin; 0 is Monday. */
  days: number[];
  /** Hour of the UTC day. */
  hour: number;
  sets: number;
  capacity: number;
  layoverHours: number;
  /** Nodes in order; the first is its origin. */
  path: string[];
  /** Nodes where it sets out and picks up, origin and end included. */
  stops: string[];
}

const daily = [0, 1, 2, 3, 4, 5, 6];

type Row = [
  id: string,
  carries: Turn['carries'],
  days: number[],
  hour: number,
  sets: number,
  capacity: number,
  layoverHours: number,
  path: string,
  between: string[],
];

const rows: Row[] = [
  ['LAKE', 'cars', daily, 6, 2, 60, 5, 'ALDER LARCHJ CAIRN GREBE', ['CAIRN']],
  ['RESIN', 'cars', daily, 9, 2, 60, 4, 'ALDER WICKETT STONECRP', []],
  ['PRAIRIE', 'cars', daily, 4, 2, 60, 4, 'ALDER LARCHJ MILLRACE QUERN', ['MILLRACE']],
  ['SOUTH', 'cars', daily, 12, 2, 60, 4, 'ALDER HOLLIN FALLOW', ['HOLLIN']],
  ['RIVER', 'cars', daily, 15, 2, 70, 4, 'ALDER WICKETT HERONJ OSPREY BITTERN', []],
  ['SHORE', 'cars', [0, 2, 4], 3, 1, 50, 6, 'GREBE MARTEN STONECRP', []],
  ['NORTH', 'cars', [0, 2, 4, 6], 10, 1, 60, 5, 'GREBE CAIRN SEDGE MILLRACE', ['CAIRN']],
  ['MILL', 'cars', [1, 3, 5, 6], 17, 1, 50, 4, 'QUERN TEAL FALLOW', []],
  ['BOXNORTH', 'boxes', daily, 2, 3, 30, 8, 'OSPREY HERONJ WICKETT ALDER LARCHJ CAIRN GREBE', []],
  ['BOXWEST', 'boxes', daily, 20, 2, 30, 8, 'OSPREY HERONJ HOLLIN FALLOW TEAL', []],
  [
    'THROUGH',
    'strangers',
    [0, 2, 5],
    7,
    2,
    58,
    20,
    `${OUTSIDE} FALLOW HOLLIN ALDER WICKETT HERONJ OSPREY BITTERN ${OUTSIDE}`,
    [],
  ],
];

/** The weekly plan. */
export const turns: Turn[] = rows.map((row) => {
  const [id, carries, days, hour, sets, capacity, layoverHours, nodes, between] = row;
  const path = nodes.split(' ');
  const stops = [...path.slice(0, 1), ...between, ...path.slice(-1)];
  return { id, carries, days, hour, sets, capacity, layoverHours, path, stops };
});

/** How often a day a site's own engine sorts cars over one of its leads. */
export const sortings: { site: string; timesADay: number }[] = [
  { site: 'ALDER', timesADay: 10 },
  { site: 'BITTERN', timesADay: 5 },
  { site: 'FALLOW', timesADay: 4 },
  { site: 'GREBE', timesADay: 4 },
  { site: 'STONECRP', timesADay: 4 },
  { site: 'CAIRN', timesADay: 3 },
];
