import { useQuery } from '@tanstack/react-query';
import { ErrorNotice, LoadingSentence } from '../../../components/ui/notice';
import { Sentence } from '../../../components/ui/sentence';
import { capital, counted, listed } from '../../../lib/words';
import { rebuildsInQuery } from '../api/rebuild-list';

/** What is being made anew now, in a sentence. */
export function ReworkSentence() {
  const running = useQuery(rebuildsInQuery('running'));
  const waiting = useQuery(rebuildsInQuery('waiting'));
  const stopped = useQuery(rebuildsInQuery('stopped'));
  const failed = [running, waiting, stopped].find(({ isError, data }) => isError && !data);
  if (failed) {
    return (
      <div className="inset pt-20">
        <h1 className="only-heard">Rework</h1>
        <ErrorNotice
          what="What is being made anew did not come"
          error={failed.error}
          onRetry={() => void failed.refetch()}
        />
      </div>
    );
  }
  if (!running.data || !waiting.data || !stopped.data) return <LoadingSentence />;
  const [runs, waits, stands] = [running, waiting, stopped].map(
    ({ data }) => data?.rows.length ?? 0,
  );
  return (
    <Sentence under={stands ? stoppedNote : note}>
      {say(runs ?? 0, waits ?? 0, stands ?? 0)}
    </Sentence>
  );
}

const note =
  'When places, readers, tags or cars are entered otherwise, the history that hangs on them is made anew from the reads. What is read meanwhile goes first.';
const stoppedNote =
  'What is stopped leaves a part of history as it was before the change, until it goes on.';

function say(running: number, waiting: number, stopped: number): string {
  const parts = [
    running > 0 ? `${counted(running, 'rework is', 'reworks are')} under way` : null,
    waiting > 0 ? `${counted(waiting, 'rework waits', 'reworks wait')}` : null,
    stopped > 0 ? `${counted(stopped, 'rework is', 'reworks are')} stopped` : null,
  ].filter((part) => part !== null);
  if (parts.length === 0) return 'Nothing of history is being made anew.';
  return `${capital(listed(parts))}.`;
}
