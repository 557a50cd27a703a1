import { queryString } from './api-client';

/** Every address of the product's screens. */
export const paths = {
  home: '/',
  signIn: (back?: string) => `/sign-in${queryString({ back })}`,
  fleet: (filter: Partial<FleetFilter> = {}) => `/fleet${queryString({ ...filter })}`,
  equipment: (unitId: string) => `/equipment/${encodeURIComponent(unitId)}`,
  alerts: (filter: { state?: string; watch?: string | number } = {}) =>
    `/alerts${queryString(filter)}`,
  rework: '/rework',
  watches: '/watches',
  doubts: '/doubts',
  setAside: (filter: { code?: string; site?: string } = {}) => `/set-aside${queryString(filter)}`,
  demoMailbox: '/demo/mailbox',
  demoCases: '/what-to-look-at',
};

/** What the address of Fleet can say. All values are words of the contract, or free text. */
export interface FleetFilter {
  search: string;
  state: string;
  quiet: string;
  pastLimit: string;
  site: string;
  kind: string;
  owner: string;
  sort: string;
}

/** The filter that an address carries, without empty parts. */
export function readFleetFilter(parameters: URLSearchParams): Partial<FleetFilter> {
  const names: (keyof FleetFilter)[] = [
    'search',
    'state',
    'quiet',
    'pastLimit',
    'site',
    'kind',
    'owner',
    'sort',
  ];
  return Object.fromEntries(
    names.flatMap((name) => {
      const value = parameters.get(name);
      return value ? [[name, value]] : [];
    }),
  );
}

const equipment = (unitId: string) => `/api/equipment/${encodeURIComponent(unitId)}`;

/** Every address of the HTTP interface that the screens use. */
export const api = {
  session: '/api/session',
  equipmentList: '/api/equipment',
  equipment,
  movements: (unitId: string) => `${equipment(unitId)}/movements`,
  sightings: (unitId: string) => `${equipment(unitId)}/sightings`,
  reads: (unitId: string) => `${equipment(unitId)}/reads`,
  unitDoubts: (unitId: string) => `${equipment(unitId)}/doubts`,
  doubts: '/api/doubts',
  unitReports: (unitId: string) => `${equipment(unitId)}/reports`,
  handReports: (site: string) => `/api/sites/${encodeURIComponent(site)}/hand-reports`,
  retractions: (site: string) => `/api/sites/${encodeURIComponent(site)}/hand-reports/retractions`,
  fleetSummary: '/api/fleet/summary',
  map: '/api/map',
  lookUp: '/api/look-up',
  events: '/api/events',
  watches: '/api/watches',
  watch: (id: number | string) => `/api/watches/${id}`,
  watchPreview: '/api/watches/preview',
  alerts: '/api/alerts',
  rebuilds: '/api/rebuilds',
  rebuildAct: (id: number, act: 'stop' | 'resume') => `/api/rebuilds/${id}/${act}`,
  demoCases: '/api/demo/cases',
  heldReads: '/api/held-reads',
  heldReadList: '/api/held-reads/reads',
  heldTags: '/api/held-reads/tags',
  heldRelease: '/api/held-reads/release',
  antennas: '/api/antennas',
  readPoints: '/api/read-points',
  registerTags: (unitId: string) => `/api/register/${encodeURIComponent(unitId)}/tags`,
  alertAct: (id: number | string, act: 'acknowledge' | 'snooze' | 'close') =>
    `/api/alerts/${id}/${act}`,
};
