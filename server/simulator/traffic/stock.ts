import { between, type Random } from '../random.js';
import { units, type DemoUnit } from '../world/equipment.js';
import { busyFor, firstPlace, nextDestination } from './flows.js';
import { nextStop } from './hops.js';
import { siteAt } from './network.js';
import type { Load } from './pass.js';

export const HOUR = 3_600_000;

/** A car or box that stands at a site. */
export interface Standing {
  unit: DemoUnit;
  since: number;
  /** From then on a train may take it. */
  readyAt: number;
  destination: string;
  /** Where it leaves the next train. */
  getOff: string;
}

/** A car in a train. */
export interface Riding {
  unit: DemoUnit;
  destination: string;
  getOff: string;
  bLeads: boolean;
  loads: Load[];
}

const isCar = (unit: DemoUnit) => ['tank', 'meal', 'grain', 'freight'].includes(unit.flow);
const carriesOf = (unit: DemoUnit) => (isCar(unit) ? 'cars' : 'boxes');

/** Everything of the region's own that stands at its sites, and the strangers outside. */
export class Stock {
  readonly strangers = {
    cars: units.filter((unit) => unit.flow === 'stranger'),
    wells: units.filter((unit) => unit.flow === 'strangerWell'),
    boxes: units.filter((unit) => unit.flow === 'strangerBox'),
  };
  private readonly sites = new Map<string, Standing[]>();

  constructor(
    private readonly random: Random,
    start: number,
  ) {
    for (const unit of units) {
      if (!isCar(unit) && unit.flow !== 'well' && unit.flow !== 'box') continue;
      const site = firstPlace(random, unit.flow);
      this.place(unit, site, start, null, between(random, 2, 70));
    }
  }

  /** Sets a unit down at a site, with a new destination where it had reached the old. */
  place(
    unit: DemoUnit,
    site: string,
    at: number,
    destination: string | null,
    hours: number | null = null,
  ): void {
    const isTransfer = destination !== null && destination !== site;
    const target = isTransfer ? destination : nextDestination(this.random, unit.flow, site);
    const place = siteAt(site);
    if (!place) throw new Error(`${unit.identity.display} cannot be set out at ${site}.`);
    const busy = hours ?? busyFor(this.random, unit.flow, place, isTransfer);
    this.at(site).push({
      unit,
      since: at,
      readyAt: at + busy * HOUR,
      destination: target,
      getOff: nextStop(carriesOf(unit), site, target),
    });
  }

  /** Takes away the units of `site` that `wanted` picks, longest ready first, at most `most`. */
  take(site: string, most: number, wanted: (standing: Standing) => boolean): Standing[] {
    const here = this.at(site);
    const picked = here.filter(wanted).sort((a, b) => a.readyAt - b.readyAt);
    const taken = new Set(picked.slice(0, most));
    this.sites.set(
      site,
      here.filter((standing) => !taken.has(standing)),
    );
    return [...taken];
  }

  /** What stands at `site`, to look at. */
  at(site: string): Standing[] {
    const here = this.sites.get(site) ?? [];
    this.sites.set(site, here);
    return here;
  }
}
