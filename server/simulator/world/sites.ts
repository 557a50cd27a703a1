export type SiteKind = 'yard' | 'line' | 'interchange' | 'terminal' | 'port' | 'industry' | 'shop';

export interface DemoSite {
  code: string;
  name: string;
  kind: SiteKind;
  latitude: number;
  longitude: number;
  timeZone: string;
  returnHours: number;
  dwellLimitHours: number;
  /** The tracks in and out, where one of them is not equipped; empty: not listed. */
  leads: { name: string; equipped: boolean }[];
}

const central = 'America/Chicago';

function site(
  code: string,
  name: string,
  kind: SiteKind,
  [latitude, longitude]: [number, number],
  dwellLimitHours: number,
  timeZone = central,
): DemoSite {
  const limits = { returnHours: 12, dwellLimitHours, leads: [] };
  return { code, name, kind, latitude, longitude, timeZone, ...limits };
}

/** The branch west of Alder Bend, where each case of the railway can be found at a fixed place. */
const branchSites: DemoSite[] = [
  site('ROWAN', 'Rowan Quarry', 'industry', [44.56, -93.62], 144),
  {
    ...site('SORREL', 'Sorrel Yard', 'yard', [44.62, -93.91], 96),
    leads: [
      { name: 'West lead, two tracks', equipped: true },
      { name: 'East lead', equipped: false },
    ],
  },
  site('LINNET', 'Linnet Line', 'line', [44.68, -94.18], 96),
  site('PIPIT', 'Pipit Storage Tracks', 'industry', [44.74, -94.45], 2_160),
  site('BRYONY', 'Bryony Kiln', 'industry', [44.82, -94.2], 144),
];

/** Invented places on the real outlines of the upper Midwest. */
export const sites: DemoSite[] = [
  site('ALDER', 'Alder Bend Yard', 'yard', [44.52, -93.32], 96),
  site('CAIRN', 'Cairn Junction', 'yard', [46.02, -92.36], 96),
  site('BITTERN', 'Bittern Yard', 'yard', [42.62, -89.42], 96),
  site('FALLOW', 'Fallow Interchange', 'interchange', [42.86, -94.3], 96),
  site('GREBE', 'Grebe Point Port', 'port', [46.7, -91.7], 144),
  site('OSPREY', 'Osprey Lake Ramp', 'terminal', [43.42, -90.66], 144),
  site('TEAL', 'Teal Slough Ramp', 'terminal', [43.42, -94.92], 120),
  site('MILLRACE', 'Millrace Elevator', 'industry', [45.36, -94.86], 144),
  site('QUERN', 'Quern Mills', 'industry', [44.2, -95.3], 144),
  site('STONECRP', 'Stonecrop Plant', 'industry', [45.24, -90.34], 144),
  site('HOLLIN', 'Hollin Shop', 'shop', [43.32, -92.86], 336),
  site('WICKETT', 'Wickett Line', 'line', [44.6, -91.82], 96),
  site('SEDGE', 'Sedge Crossing', 'line', [46.52, -94.02], 96),
  site('MARTEN', 'Marten Falls Line', 'line', [46.05, -89.95], 96, 'America/Detroit'),
  ...branchSites,
];
