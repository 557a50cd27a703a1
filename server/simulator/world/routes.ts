import { sites } from './sites.js';

export interface DemoNode {
  code: string;
  name: string;
  /** Code of the site that stands there; null for a bare junction. */
  site: string | null;
  latitude: number;
  longitude: number;
}

export interface DemoEdge {
  from: string;
  to: string;
  railMetres: number;
  kind: 'rail';
  line: string;
}

/** Every site is a node of the same code; the junctions have none. */
export const nodes: DemoNode[] = [
  ...sites.map(({ code, name, latitude, longitude }) => ({
    code,
    name,
    site: code,
    latitude,
    longitude,
  })),
  { code: 'LARCHJ', name: 'Larch Junction', site: null, latitude: 44.74, longitude: -93.38 },
  { code: 'HERONJ', name: 'Heron Junction', site: null, latitude: 43.56, longitude: -91.16 },
];

function edge(from: string, to: string, railMetres: number, line: string): DemoEdge {
  return { from, to, railMetres, kind: 'rail', line };
}

/** About 1,530 rail miles; each a little longer than the great circle between its ends. */
export const edges: DemoEdge[] = [
  edge('SEDGE', 'CAIRN', 144_700, 'North Line'),
  edge('SEDGE', 'MILLRACE', 150_200, 'North Line'),
  edge('CAIRN', 'GREBE', 94_600, 'Lake Line'),
  edge('CAIRN', 'LARCHJ', 169_600, 'Lake Line'),
  edge('MILLRACE', 'LARCHJ', 140_600, 'Prairie Line'),
  edge('LARCHJ', 'ALDER', 25_900, 'Lake Line'),
  edge('GREBE', 'MARTEN', 172_000, 'Shore Line'),
  edge('MARTEN', 'STONECRP', 112_000, 'Shore Line'),
  edge('STONECRP', 'WICKETT', 142_000, 'Resin Branch'),
  edge('WICKETT', 'ALDER', 123_900, 'River Line'),
  edge('WICKETT', 'HERONJ', 132_200, 'River Line'),
  edge('HOLLIN', 'HERONJ', 145_400, 'Ridge Line'),
  edge('HERONJ', 'OSPREY', 45_000, 'River Line'),
  edge('OSPREY', 'BITTERN', 139_800, 'River Line'),
  edge('MILLRACE', 'QUERN', 138_900, 'Prairie Line'),
  edge('QUERN', 'TEAL', 95_600, 'Prairie Line'),
  edge('TEAL', 'FALLOW', 83_300, 'Prairie Line'),
  edge('FALLOW', 'HOLLIN', 132_700, 'South Line'),
  edge('HOLLIN', 'ALDER', 144_000, 'South Line'),
  edge('ALDER', 'ROWAN', 27_400, 'Kiln Branch'),
  edge('ROWAN', 'SORREL', 27_200, 'Kiln Branch'),
  edge('SORREL', 'LINNET', 25_600, 'Kiln Branch'),
  edge('LINNET', 'PIPIT', 25_800, 'Kiln Branch'),
  edge('LINNET', 'BRYONY', 17_900, 'Kiln Branch'),
];
