import { formatDistance } from '../../lib/distances';
import { formatDuration } from '../../lib/durations';
import type { Preferences } from '../../lib/preferences';
import type { DoubtView } from '../../lib/wire';

/** "132 mi by rail in 28 min"; '' where the earlier place is not shown. */
export function sayApart({ at, previous }: DoubtView, distance: Preferences['distance']): string {
  if (!previous) return '';
  const minutes = (Date.parse(at) - Date.parse(previous.at)) / 60_000;
  return `${formatDistance(previous.railMetres, distance)} by rail in ${formatDuration(minutes)}`;
}

/** What may be behind it. */
export const sayCause = ({ kind, site }: DoubtView): string =>
  kind === 'clock'
    ? `the clock at ${site.name} may be wrong`
    : 'its tag or number may be on two cars';

const reasons = {
  mates: 'cars that were with it before were with it again',
  point: 'it was read at another reader that fits the later one',
  side: 'its other tag answered there too',
} as const;

/** What came of it: "the later one did not move it", or why it counts. */
export const sayOutcome = ({ corroboratedBy }: DoubtView): string =>
  corroboratedBy
    ? `The later one counts: ${reasons[corroboratedBy]}`
    : 'The later one did not move it';
