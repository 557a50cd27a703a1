import type { EquipmentKind } from '../../domain/identifiers/equipment-groups.js';

/** Which way of life a unit has: where it loads, unloads and waits (see flows.ts). */
export type Flow =
  | 'tank'
  | 'grain'
  | 'meal'
  | 'freight'
  | 'well'
  | 'box'
  | 'power'
  | 'rear'
  | 'stranger'
  | 'strangerWell'
  | 'strangerBox'
  | 'strangerPower'
  | 'strangerRear'
  /** Of the branch, whose trains keep a timetable of their own (traffic/branch/). */
  | 'branch';

export interface Fleet {
  mark: string;
  first: number;
  count: number;
  kind: EquipmentKind;
  carType: string;
  owner: string | null;
  lengthDm: number;
  axles: number;
  flow: Flow;
  /** How many of the first carry EPC tags instead of AEI tags. */
  withEpc?: number;
}

type Row = [
  mark: string,
  first: number,
  count: number,
  kind: EquipmentKind,
  carType: string,
  owner: string | null,
  lengthDm: number,
  axles: number,
  flow: Flow,
  withEpc?: number,
];

/** Some 920 cars and 400 boxes on the register, and as many strangers that only pass. */
const rows: Row[] = [
  ['QTKX', 40_100, 300, 'car', 'tank car', 'QUARREL', 165, 4, 'tank'],
  ['QTHX', 61_000, 130, 'car', 'covered hopper', 'QUARREL', 183, 4, 'meal'],
  ['QBLX', 2_200, 190, 'car', 'covered hopper', 'BRACKENLD', 179, 4, 'grain', 12],
  ['QWLX', 700, 110, 'car', 'well car', 'BRACKENLD', 235, 4, 'well'],
  ['QWKR', 151_000, 90, 'car', 'boxcar', 'QUERNWICK', 172, 4, 'freight'],
  ['QWKR', 187_300, 80, 'car', 'gondola', 'QUERNWICK', 174, 4, 'freight'],
  ['ZQXU', 305_400, 200, 'container', 'box, 40 foot', 'QUILLBOX', 122, 1, 'box'],
  ['ZQMU', 411_800, 200, 'container', 'box, 40 foot', 'QUILLBOX', 122, 1, 'box', 40],
  ['QWKR', 2_001, 42, 'locomotive', 'road locomotive', 'QUERNWICK', 225, 6, 'power'],
  ['QWKE', 9_001, 18, 'endOfTrain', 'end-of-train device', 'QUERNWICK', 4, 1, 'rear'],
  ['QDRX', 73_000, 340, 'car', 'covered hopper', null, 180, 4, 'stranger'],
  ['QFNX', 28_400, 260, 'car', 'tank car', null, 168, 4, 'stranger'],
  ['QHPR', 330_100, 180, 'car', 'boxcar', null, 171, 4, 'stranger'],
  ['QKVX', 5_500, 120, 'car', 'well car', null, 236, 4, 'strangerWell'],
  ['ZQKU', 620_100, 220, 'container', 'box, 40 foot', null, 122, 1, 'strangerBox', 20],
  ['ZQRU', 781_500, 180, 'container', 'box, 40 foot', null, 122, 1, 'strangerBox'],
  ['QVLZ', 240_300, 60, 'trailer', 'trailer', null, 162, 2, 'strangerBox'],
  ['QHPR', 5_101, 6, 'locomotive', 'road locomotive', null, 226, 6, 'strangerPower'],
  ['QHPE', 8_001, 2, 'endOfTrain', 'end-of-train device', null, 4, 1, 'strangerRear'],
  ['QTKX', 40_400, 8, 'car', 'tank car', 'QUARREL', 165, 4, 'branch'],
  ['QWKR', 160_001, 11, 'car', 'covered hopper', 'QUERNWICK', 174, 4, 'branch'],
  ['QWKR', 170_001, 2, 'car', 'flat car', 'QUERNWICK', 272, 4, 'branch'],
  ['QWTZ', 410_001, 4, 'trailer', 'trailer', 'QUERNWICK', 136, 2, 'branch'],
  ['QWKR', 2_101, 3, 'locomotive', 'road locomotive', 'QUERNWICK', 225, 6, 'branch'],
  ['QWKE', 9_101, 2, 'endOfTrain', 'end-of-train device', 'QUERNWICK', 4, 1, 'branch'],
];

/** The rows above by name. */
export const fleets: Fleet[] = rows.map(
  ([mark, first, count, kind, carType, owner, lengthDm, axles, flow, withEpc]) => ({
    mark,
    first,
    count,
    kind,
    carType,
    owner,
    lengthDm,
    axles,
    flow,
    ...(withEpc === undefined ? {} : { withEpc }),
  }),
);
