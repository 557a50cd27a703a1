import { between, weighted, type Random } from '../random.js';
import type { Flow } from '../world/fleets.js';
import type { DemoSite } from '../world/sites.js';

/** Where cars of a flow load, and where they take it; empty, they go back to a place of loading. */
const lanes: Partial<Record<Flow, { loads: string[]; to: Record<string, number> }>> = {
  tank: { loads: ['STONECRP'], to: { FALLOW: 35, BITTERN: 30, GREBE: 20, QUERN: 15 } },
  meal: { loads: ['QUERN'], to: { FALLOW: 40, BITTERN: 30, GREBE: 30 } },
  grain: { loads: ['MILLRACE'], to: { GREBE: 50, BITTERN: 30, QUERN: 20 } },
  freight: {
    loads: ['BITTERN', 'FALLOW', 'CAIRN'],
    to: { GREBE: 25, STONECRP: 20, QUERN: 20, CAIRN: 15, ALDER: 20 },
  },
  well: { loads: ['OSPREY'], to: { GREBE: 60, TEAL: 40 } },
  box: { loads: ['OSPREY'], to: { GREBE: 68, TEAL: 32 } },
};

const SHOP = 'HOLLIN';
const SHOPPED = 0.015;
/** Share of stays that outlast the site's limit. */
const OVERSTAYS = 0.01;

/** Hours that a car is busy where it was going: at least, at most. */
const busyHours: Record<DemoSite['kind'], [number, number]> = {
  yard: [20, 60],
  line: [0, 0],
  interchange: [20, 64],
  terminal: [12, 44],
  port: [30, 90],
  industry: [30, 80],
  shop: [60, 220],
};
/** Hours that a well car is loaded and unloaded; its boxes take as long as the ramp does. */
const WELL_HOURS: [number, number] = [5, 15];
/** Hours in a yard on the way, before the next train may take it. */
const TRANSFER_HOURS: [number, number] = [7, 24];

/** Where a unit of this flow that now stands at `site` goes next. */
export function nextDestination(random: Random, flow: Flow, site: string): string {
  const lane = lanes[flow];
  if (!lane) throw new Error(`${flow} has no way of life of its own.`);
  if (flow !== 'box' && flow !== 'well' && site !== SHOP && random() < SHOPPED) return SHOP;
  const targets = lane.loads.includes(site)
    ? lane.to
    : Object.fromEntries(lane.loads.map((code) => [code, 1]));
  const { [site]: _here, ...elsewhere } = targets;
  return weighted(random, elsewhere);
}

/** Where a unit of this flow is found when the invented world begins. */
export function firstPlace(random: Random, flow: Flow): string {
  const lane = lanes[flow];
  if (!lane) throw new Error(`${flow} has no way of life of its own.`);
  return random() < 0.5
    ? weighted(random, lane.to)
    : weighted(random, Object.fromEntries(lane.loads.map((code) => [code, 1])));
}

/** Hours until a unit that came in may leave again; now and then longer than the site allows. */
export function busyFor(random: Random, flow: Flow, site: DemoSite, isTransfer: boolean): number {
  if (random() < OVERSTAYS) return site.dwellLimitHours + between(random, 2, 55);
  const atEnd = flow === 'well' ? WELL_HOURS : busyHours[site.kind];
  const [low, high] = isTransfer ? TRANSFER_HOURS : atEnd;
  return between(random, low, high);
}

/** The shop's code, where cars go that need repair. */
export const shop = SHOP;
