import { useQuery } from '@tanstack/react-query';
import { Mark } from '../../../components/ui/mark';
import { sayReason } from '../../../components/ui/notice';
import { formatDuration } from '../../../lib/durations';
import { counted } from '../../../lib/words';
import type { WatchPreviewAnswer, WatchPreviewInput } from '../../../lib/wire';
import { watchPreviewQuery } from '../api/preview-watch';

/** What the watch would cover and raise at once; nothing is kept of it. */
export function WatchPreview({ input }: { input: WatchPreviewInput | null }) {
  const preview = useQuery(watchPreviewQuery(input));
  return (
    <div className="min-h-52 border-y border-rule py-8 text-table" aria-live="polite">
      {input === null ? (
        <span className="text-ink-soft">Fill the blanks to see how many it covers.</span>
      ) : preview.isError ? (
        sayReason(preview.error)
      ) : preview.data ? (
        <Covers preview={preview.data} />
      ) : (
        <span className="text-ink-soft">Counting what it covers.</span>
      )}
    </div>
  );
}

type Preview = WatchPreviewAnswer['data'];

function Covers({ preview }: { preview: Preview }) {
  const { covers, wouldRaise, first } = preview;
  return (
    <>
      <p>
        It covers <b className="font-semibold">{counted(covers, 'car or box', 'cars and boxes')}</b>
        .{' '}
        {wouldRaise === 0
          ? 'None would raise an alert now.'
          : `${counted(wouldRaise, 'alert', 'alerts')} would come at once.`}
      </p>
      {first.length > 0 ? (
        <ul className="mt-4 flex flex-wrap gap-x-20 gap-y-2 font-condensed text-ink-soft">
          {first.slice(0, 5).map((unit) => (
            <li key={unit.unitId}>
              <Mark>{unit.display}</Mark> {unit.site?.name} {formatDuration(unit.hours * 60)}
            </li>
          ))}
        </ul>
      ) : null}
    </>
  );
}
