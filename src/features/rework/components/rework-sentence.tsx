import { useQuery } from '@tanstack/react-query';
import { ErrorNotice, LoadingSentence } from '../../../components/ui/notice';
import { Sentence } from '../../../components/ui/sentence';
import { counted, listed } from '../../../lib/words';
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
  const counts = [
    { n: running, does: ['is under way', 'are under way'] },
    { n: waiting, does: ['waits', 'wait'] },
    { n: stopped, does: ['is stopped', 'are stopped'] },
  ].filter(({ n }) => n > 0);
  if (counts.length === 0) return 'Nothing of history is being made anew.';
  const parts = counts.map(({ n, does: [one, many] }, place) => {
    const what = place === 0 ? counted(n, 'rework', 'reworks') : n.toLocaleString('en-US');
    return `${what} ${n === 1 ? one : many}`;
  });
  return `${listed(parts)}.`;
}
