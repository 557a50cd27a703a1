import { between, wholeBetween } from '../random.js';
import { inwardOf, leadsOf, opposite } from './network.js';
import { EPOCH, type Operations } from './operations.js';
import { turnedRound, type Vehicle } from './pass.js';
import type { sortings } from './plan.js';
import { HOUR } from './stock.js';

const DAY = 24 * HOUR;
const engineOnly = 1;

/** Notes the sorting of a yard: each day cars are pulled out over a lead and shoved back. */
export function noteSortings(operations: Operations, { site, hours }: (typeof sortings)[0]): void {
  const [engine] = operations.assign('power', engineOnly);
  if (!engine) return;
  for (const hour of hours) {
    const daily = (at: number) => {
      operations.agenda.note(at + DAY, daily);
      const start = operations.later(at, 0, 1);
      operations.agenda.note(start, (now) =>
        sortOver(operations, site, { unit: engine, bLeads: false, loads: [] }, now),
      );
    };
    operations.agenda.note(EPOCH + hour * HOUR, daily);
  }
}

function sortOver(operations: Operations, site: string, engine: Vehicle, at: number): void {
  const { random, stock } = operations;
  const leads = leadsOf(site).filter((lead) => !lead.toward.includes('OUTSIDE'));
  const lead = leads[Math.floor(random() * leads.length)];
  const standing = stock
    .at(site)
    .filter(({ since, readyAt }) => since < at - HOUR && readyAt > at + 3 * HOUR)
    .slice(0, wholeBetween(random, 3, 9));
  if (!lead || standing.length < 3) return;
  const cars = standing.map(({ unit }) => ({ unit, bLeads: random() < 0.5, loads: [] }));
  const vehicles = [engine, ...cars];
  const outward = opposite(inwardOf(lead));
  const wish = { point: lead, vehicles, speedKmh: between(random, 6, 14), keepMs: 2 * HOUR };
  operations.pass(at, { ...wish, direction: outward, purpose: 'sortOut' }, (end) => {
    operations.release(lead, end);
    const back = { ...wish, vehicles: turnedRound(vehicles), keepMs: 0 };
    const start = operations.later(end, 0.08, 0.5);
    operations.pass(start, { ...back, direction: inwardOf(lead), purpose: 'sortBack' }, () => {});
  });
}
