import { turns, type Turn } from './plan.js';

type Carries = Turn['carries'];

/** Stops that one train of this kind reaches from each stop, in either direction. */
function directStops(carries: Carries): Map<string, string[]> {
  const direct = new Map<string, string[]>();
  for (const turn of turns.filter((each) => each.carries === carries)) {
    for (const from of turn.stops) {
      const others = turn.stops.filter((stop) => stop !== from);
      direct.set(from, [...(direct.get(from) ?? []), ...others]);
    }
  }
  return direct;
}

function firstHops(direct: Map<string, string[]>, from: string): Map<string, string> {
  const first = new Map<string, string>();
  const queue = [from];
  for (let at = queue.shift(); at !== undefined; at = queue.shift()) {
    for (const stop of direct.get(at) ?? []) {
      if (stop === from || first.has(stop)) continue;
      first.set(stop, at === from ? stop : (first.get(at) ?? stop));
      queue.push(stop);
    }
  }
  return first;
}

function hopsOf(carries: Carries): Map<string, Map<string, string>> {
  const direct = directStops(carries);
  return new Map([...direct.keys()].map((from) => [from, firstHops(direct, from)]));
}

const hops = { cars: hopsOf('cars'), boxes: hopsOf('boxes') };

/** Where a car at `from` that goes to `destination` leaves its next train. Throws when none goes. */
export function nextStop(carries: 'cars' | 'boxes', from: string, destination: string): string {
  const stop = hops[carries].get(from)?.get(destination);
  if (stop === undefined) throw new Error(`No train leads from ${from} to ${destination}.`);
  return stop;
}
