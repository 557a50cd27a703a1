/**
 * What a read point has to tell direction by: wheel sensors (and one offset), two offsets a side,
 * one antenna a side at one offset and nothing else, or one antenna alone.
 */
export type Equipment = 'sensors' | 'twoOffsets' | 'oneOffset' | 'single';

export interface DemoAntenna {
  number: number;
  offsetM: number;
  side: 'left' | 'right';
}

export interface DemoReadPoint {
  site: string;
  code: string;
  name: string;
  track: string | null;
  kind: 'line' | 'spot';
  /** Code of the site on that side; null for the open line. */
  decreasingPlace: string | null;
  increasingPlace: string | null;
  equipment: Equipment;
  antennas: DemoAntenna[];
  /** Nodes that a train comes from or goes to over this read point, on the side of the line. */
  toward: string[];
}

/** Outside of the region: where strangers come from and go to. */
export const OUTSIDE = 'OUTSIDE';

const sides = ['left', 'right'] as const;

function antennasFrom(first: number, equipment: Equipment): DemoAntenna[] {
  if (equipment === 'single') return [{ number: first, offsetM: 0, side: 'left' }];
  const offsets = equipment === 'twoOffsets' ? [-6, 6] : [0];
  return offsets.flatMap((offsetM, at) =>
    sides.map((side, index) => ({ number: first + at * 2 + index, offsetM, side })),
  );
}

type Lead = [
  site: string,
  code: string,
  name: string,
  equipment: Equipment,
  toward: string[],
  inward: 'increasing' | 'decreasing',
  track?: string,
];

/** Each lead with the line on its outer side; some count their metres towards the site. */
const leads: Lead[] = [
  ['ALDER', 'N', 'North lead', 'sensors', ['LARCHJ'], 'increasing'],
  ['ALDER', 'E', 'East lead', 'twoOffsets', ['WICKETT'], 'decreasing'],
  ['ALDER', 'S', 'South lead', 'sensors', ['HOLLIN'], 'decreasing'],
  ['CAIRN', 'N', 'North lead', 'twoOffsets', ['GREBE', 'SEDGE'], 'increasing'],
  ['CAIRN', 'S', 'South lead', 'sensors', ['LARCHJ'], 'decreasing'],
  ['BITTERN', 'W', 'West lead', 'sensors', ['OSPREY'], 'increasing'],
  ['BITTERN', 'X', 'Exchange lead', 'twoOffsets', [OUTSIDE], 'decreasing'],
  ['FALLOW', 'E', 'East lead', 'twoOffsets', ['HOLLIN', 'TEAL'], 'decreasing'],
  ['FALLOW', 'X', 'Exchange lead', 'sensors', [OUTSIDE], 'increasing'],
  ['GREBE', 'L', 'Port lead', 'twoOffsets', ['CAIRN', 'MARTEN'], 'increasing'],
  ['OSPREY', 'L', 'Ramp lead', 'sensors', ['HERONJ', 'BITTERN'], 'increasing'],
  ['TEAL', 'L', 'Ramp lead', 'twoOffsets', ['QUERN', 'FALLOW'], 'decreasing'],
  ['MILLRACE', 'L', 'Elevator lead', 'oneOffset', ['SEDGE', 'LARCHJ', 'QUERN'], 'increasing'],
  ['QUERN', 'L', 'Mill lead', 'twoOffsets', ['MILLRACE', 'TEAL'], 'decreasing'],
  ['STONECRP', 'L', 'Plant lead', 'sensors', ['WICKETT', 'MARTEN'], 'increasing'],
  ['HOLLIN', 'L', 'Shop lead', 'sensors', ['ALDER', 'FALLOW', 'HERONJ'], 'increasing'],
  ['ROWAN', 'L', 'Quarry lead', 'sensors', ['SORREL', 'ALDER'], 'increasing'],
  ['SORREL', 'W1', 'West lead 1', 'twoOffsets', ['LINNET'], 'increasing', 'West 1'],
  ['SORREL', 'W2', 'West lead 2', 'twoOffsets', ['LINNET'], 'increasing', 'West 2'],
  ['PIPIT', 'L', 'Storage lead', 'single', ['LINNET'], 'decreasing'],
];

type LinePoint = [
  site: string,
  code: string,
  name: string,
  equipment: Equipment,
  decreasing: string[],
];

/** Points of the open line, with the nodes on their decreasing side. */
const linePoints: LinePoint[] = [
  ['WICKETT', 'M', 'Main track', 'sensors', ['ALDER']],
  ['SEDGE', 'M', 'Main track', 'twoOffsets', ['MILLRACE']],
  ['MARTEN', 'M', 'Main track', 'oneOffset', ['GREBE']],
  ['LINNET', 'M', 'Main track', 'sensors', ['SORREL']],
];

function leadPoint([site, code, name, equipment, toward, inward, track]: Lead): DemoReadPoint {
  const ofSite = leads.filter((lead) => lead[0] === site);
  const first = 1 + 4 * ofSite.findIndex((lead) => lead[1] === code);
  return {
    site,
    code,
    name,
    track: track ?? null,
    kind: 'line',
    decreasingPlace: inward === 'decreasing' ? site : null,
    increasingPlace: inward === 'increasing' ? site : null,
    equipment,
    antennas: antennasFrom(first, equipment),
    toward,
  };
}

function linePoint([site, code, name, equipment, toward]: LinePoint): DemoReadPoint {
  const antennas = antennasFrom(1, equipment);
  const places = { decreasingPlace: null, increasingPlace: null };
  return { site, code, name, track: null, kind: 'line', ...places, equipment, antennas, toward };
}

/** The door of the shop: one place, so a read there says "in the shop". */
const shopDoor: DemoReadPoint = {
  site: 'HOLLIN',
  code: 'DOOR',
  name: 'Shop door',
  track: 'Shop 2',
  kind: 'spot',
  decreasingPlace: 'HOLLIN',
  increasingPlace: 'HOLLIN',
  equipment: 'oneOffset',
  antennas: antennasFrom(5, 'oneOffset'),
  toward: [],
};

/** Every read point of the region, all four kinds of equipment among them. */
export const readPoints: DemoReadPoint[] = [
  ...leads.map(leadPoint),
  ...linePoints.map(linePoint),
  shopDoor,
];
