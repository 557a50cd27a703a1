import { useQuery } from '@tanstack/react-query';
import { Link, useSearchParams } from 'react-router-dom';
import { ErrorNotice, LoadingSentence } from '../components/ui/notice';
import { Counted, Sentence } from '../components/ui/sentence';
import { alertCountQuery } from '../features/alerts/api/alert-list';
import { AlertTable } from '../features/alerts/components/alert-table';
import { sessionQuery } from '../features/session/api/session';
import { paths } from '../lib/paths';
import { counted } from '../lib/words';
import { useTitle } from '../lib/use-title';
import type { AlertState } from '../lib/wire';

const states: { value: AlertState; word: string; none: string }[] = [
  { value: 'open', word: 'to answer', none: 'No alert wants an answer.' },
  { value: 'acknowledged', word: 'acknowledged', none: 'Nobody has an alert in hand.' },
  { value: 'cleared', word: 'cleared', none: 'No alert has cleared yet.' },
];

/** Alerts: what wants an answer, what is in hand, what has cleared. */
export function AlertsPage() {
  useTitle('Alerts');
  const [parameters] = useSearchParams();
  const { data: session } = useQuery(sessionQuery);
  const asked = parameters.get('state');
  const current = states.find(({ value }) => value === asked) ?? states[0];
  const watch = parameters.get('watch') ?? undefined;
  if (!current || !session) return null;
  return (
    <>
      <AlertsSentence />
      <div className="inset pb-32 pt-20">
        <p className="flex flex-wrap gap-x-16 gap-y-4 pb-12 font-condensed text-table">
          {states.map(({ value, word }) => (
            <Link
              key={value}
              to={paths.alerts({ state: value, ...(watch && { watch }) })}
              aria-current={value === current.value ? 'page' : undefined}
              className={value === current.value ? 'font-semibold decoration-2' : undefined}
            >
              {word}
            </Link>
          ))}
          {watch ? (
            <Link to={paths.alerts({ state: current.value })}>of one watch: show all</Link>
          ) : null}
          <Link to={paths.watches} className="ml-auto">
            What you asked to be told
          </Link>
        </p>
        <AlertTable
          key={current.value + (watch ?? '')}
          filter={{ state: current.value, watch }}
          zone={session.user.timeZone}
          nothing={{ says: current.none, next: <NextStep /> }}
        />
      </div>
    </>
  );
}

function NextStep() {
  return (
    <>
      Alerts come from watches. <Link to={paths.watches}>See what you asked to be told</Link>, or
      ask for more from <Link to={paths.fleet()}>Fleet</Link>.
    </>
  );
}

function AlertsSentence() {
  const open = useQuery(alertCountQuery('open'));
  const taken = useQuery(alertCountQuery('acknowledged'));
  const cleared = useQuery(alertCountQuery('cleared'));
  const failed = [open, taken, cleared].find(({ isError, data }) => isError && data === undefined);
  if (failed) {
    return (
      <div className="inset pt-20">
        <ErrorNotice
          what="The counts did not come"
          error={failed.error}
          onRetry={() => void failed.refetch()}
        />
      </div>
    );
  }
  if (open.data === undefined || taken.data === undefined || cleared.data === undefined) {
    return <LoadingSentence />;
  }
  return (
    <Sentence>
      <Counted to={paths.alerts()}>
        {open.data === 0 ? 'No alert' : counted(open.data, 'alert', 'alerts')}
      </Counted>{' '}
      {open.data < 2 ? 'wants' : 'want'} an answer;{' '}
      <Counted to={paths.alerts({ state: 'acknowledged' })}>
        {taken.data === 0 ? 'none' : taken.data}
      </Counted>{' '}
      {taken.data < 2 ? 'is' : 'are'} in hand,{' '}
      <Counted to={paths.alerts({ state: 'cleared' })}>
        {cleared.data === 0 ? 'none' : cleared.data.toLocaleString('en-US')}
      </Counted>{' '}
      {cleared.data < 2 ? 'has' : 'have'} cleared.
    </Sentence>
  );
}
