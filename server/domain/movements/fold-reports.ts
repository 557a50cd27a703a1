import { bePresent, leave, reportArrival, type Step } from './fold-rules.js';
import type { Stay } from './fold-state.js';
import type { Report } from './sighting.js';

/**
 * What somebody reported, or saw by eye. Reads go before reports: a report fills in what no
 * reader saw, and gives way to a read of the same arrival or departure.
 */
export function applyReport(step: Step, report: Report): void {
  const { siteId, track, event, basis } = report;
  switch (event) {
    case 'arrived':
      return reportArrival(step, { siteId, track }, basis);
    case 'departed':
      return hasLeft(step, siteId) ? undefined : leave(step, siteId, basis);
    case 'notThere':
      return closeGhost(step, report);
    default:
      return bePresent(step, { siteId, track }, { lingering: true, spot: false });
  }
}

/** It was last known to leave that very site. */
function hasLeft({ state }: Step, siteId: number): boolean {
  const { stay, previous } = state;
  return stay?.siteId === siteId && stay.departedAt !== null && previous?.siteId === siteId;
}

/** Somebody looked and it was not there: it left at some time since it was last seen. */
function closeGhost({ state, at }: Step, { siteId, basis }: Report): void {
  const { previous } = state;
  if (!previous || state.stay?.siteId !== siteId || state.stay.departedAt !== null) return;
  const stay: Stay = {
    ...state.stay,
    departedAt: at,
    departureBasis: basis,
    departureBounds: { earliest: previous.at, latest: at },
    departureFinalAt: null,
    outOfDwell: true,
    openedByPresence: false,
  };
  state.stay = stay;
}
