import { between, wholeBetween } from '../random.js';
import { OUTSIDE } from '../world/read-points.js';
import { inwardOf, leadsOf, opposite } from './network.js';
import { EPOCH, type Operations } from './operations.js';
import { turnedRound, type Vehicle } from './pass.js';
import type { sortings } from './plan.js';
import { HOUR } from './stock.js';

const DAY = 24 * HOUR;
const MINUTE = 60_000;
const engineOnly = 1;

/** Notes the sorting of a yard: each day cars are pulled out over a lead and shoved back. */
export function noteSortings(
  operations: Operations,
  { site, timesADay }: (typeof sortings)[0],
): void {
  const [engine] = operations.assign('power', engineOnly);
  if (!engine) return;
  for (let time = 0; time < timesADay; time += 1) {
    const daily = (at: number) => {
      operations.agenda.note(at + DAY, daily);
      const start = operations.later(at, 0, 20 / timesADay);
      operations.agenda.note(start, (now) =>
        sortOver(operations, site, { unit: engine, bLeads: false, loads: [] }, now),
      );
    };
    operations.agenda.note(EPOCH + (time * DAY) / timesADay, daily);
  }
}

function sortOver(operations: Operations, site: string, engine: Vehicle, at: number): void {
  const { random } = operations;
  const leads = leadsOf(site).filter((lead) => !lead.toward.includes(OUTSIDE));
  const lead = leads[Math.floor(random() * leads.length)];
  const cars = cutToSort(operations, site, at);
  if (!lead || cars.length < 2) return;
  const vehicles = [engine, ...cars];
  const inward = inwardOf(lead);
  const awayMs = between(random, 5, 30) * MINUTE;
  const wish = { point: lead, vehicles, speedKmh: between(random, 6, 14) };
  const out = { ...wish, direction: opposite(inward), keepMs: awayMs + 10 * MINUTE };
  operations.pass(at, { ...out, purpose: 'sortOut' }, (end) => {
    operations.agenda.note(Math.round(end + awayMs), (now) => {
      operations.release(lead, now);
      const back = { ...wish, vehicles: turnedRound(vehicles), direction: inward };
      operations.pass(now, { ...back, purpose: 'sortBack' }, () => undefined);
    });
  });
}

/** A few cars that have stood for an hour and stay for three. */
function cutToSort({ random, stock }: Operations, site: string, at: number): Vehicle[] {
  const standing = stock
    .at(site)
    .filter(({ unit }) => unit.kind === 'car')
    .filter(({ since, readyAt }) => since < at - HOUR && readyAt > at + 3 * HOUR);
  const count = wholeBetween(random, 2, 4);
  const first = Math.floor(random() * Math.max(1, standing.length - count));
  return standing
    .slice(first, first + count)
    .map(({ unit }) => ({ unit, bLeads: random() < 0.5, loads: [] }));
}
