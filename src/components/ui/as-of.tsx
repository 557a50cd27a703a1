import { ageWord, useFreshness } from '../../lib/live';
import type { Freshness } from '../../lib/live';
import { formatDuration } from '../../lib/durations';
import { formatClock } from '../../lib/times';
import { useNow } from '../../lib/use-now';

/** "as of 07:41:08 CST, live", or why it is not. The zone is IANA. */
export function AsOf({ zone }: { zone: string }) {
  const freshness = useFreshness();
  const now = useNow();
  const isStale = ageWord(freshness, now) !== 'fresh';
  return (
    <p
      role="status"
      aria-live="off"
      className={`mono ml-auto pb-[14px] text-right text-note whitespace-normal ${isStale ? 'font-medium text-ochre' : 'text-ink-soft'}`}
    >
      as of {formatClock(freshness.heardAt, zone)}, {sayLink(freshness)}
    </p>
  );
}

function sayLink({ link, projectorLagMs }: Freshness): string {
  if (link === 'lost') return 'your link dropped';
  if (projectorLagMs > 60_000) {
    return `reads arrive, we are ${formatDuration(projectorLagMs / 60_000)} behind`;
  }
  return link === 'live' ? 'live' : 'asked every 20 s';
}
