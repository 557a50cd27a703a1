import { randomOf } from '../random.js';
import { areDeaf, clockOffMs, isClockAhead, keptBackMs } from './branch/faults.js';
import { EPOCH } from './operations.js';

const HOUR = 3_600_000;
const DAY = 24 * HOUR;

/** Sites whose reader may be silent for a day; one of them is, every other week. */
const silentSites = ['STONECRP', 'WICKETT', 'MILLRACE', 'TEAL'];

/** The site whose link is down by day on these days of the week: it keeps and sends later. */
const lateSite = { code: 'QUERN', days: [1, 3, 5], fromHour: 10, toHour: 22, lateMs: 2 * HOUR };

/** The site whose clock is behind. */
const slowClock = { code: 'MARTEN', behindMs: 40_000 };

/** How long a reader keeps reads before it sends them. */
const USUAL_DELAY_MS = 1_200;

/** Whether the reader of a site is silent at that instant: what passes then is never known. */
export function isSilent(seed: string, site: string, at: number): boolean {
  const fortnight = Math.floor((at - EPOCH) / (14 * DAY));
  const random = randomOf(`${seed} silent ${fortnight}`);
  const chosen = silentSites[Math.floor(random() * silentSites.length)];
  const day = Math.floor(random() * 14);
  return chosen === site && Math.floor((at - EPOCH) / DAY) % 14 === day;
}

/** Whether nothing can be made of a tag read there and then: not heard, or its time not believed. */
export function isLost(seed: string, site: string, at: number): boolean {
  return isSilent(seed, site, at) || areDeaf(site, at) || isClockAhead(site, at);
}

/** When a read of that true instant reaches the server. */
export function deliveredAt(site: string, at: number): number {
  const day = Math.floor((at - EPOCH) / DAY) % 7;
  const hour = ((at - EPOCH) % DAY) / HOUR;
  const { code, days, fromHour, toHour, lateMs } = lateSite;
  const isLate = site === code && days.includes(day) && hour >= fromHour && hour < toHour;
  return at + USUAL_DELAY_MS + (isLate ? lateMs : 0) + keptBackMs(site, at);
}

/** The instant that the site's own clock shows. */
export function shownAt(site: string, at: number): number {
  return at + clockOffMs(site, at) - (site === slowClock.code ? slowClock.behindMs : 0);
}

/** The longest that anything arrives after it happened. */
export const LATEST_MS = lateSite.lateMs + 60_000;
