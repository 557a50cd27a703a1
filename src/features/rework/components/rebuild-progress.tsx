import type { RebuildView } from '../../../lib/wire';
import { sayShare, sayState } from '../say-rebuild';

/** How far it has come, as a bar and in words. */
export function RebuildProgress({ rebuild }: { rebuild: RebuildView }) {
  const { label, doneShare, state } = rebuild;
  return (
    <span className="flex items-center gap-12">
      <progress
        className="progress"
        data-state={state}
        max={1}
        value={state === 'done' ? 1 : doneShare}
        aria-label={`${label}: how much is done`}
      />
      <span className="flex-none whitespace-nowrap">
        {state === 'done' ? null : <span className="mono">{sayShare(rebuild)} </span>}
        {sayState(rebuild)}
      </span>
    </span>
  );
}
