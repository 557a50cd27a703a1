import { useInfiniteQuery, useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { Counted, Sentence } from '../components/ui/sentence';
import { mapQuery } from '../features/network/api/map';
import { sessionQuery } from '../features/session/api/session';
import { watchListQuery } from '../features/watches/api/watch-list';
import { NewWatch } from '../features/watches/components/new-watch';
import { WatchTable } from '../features/watches/components/watch-table';
import { paths } from '../lib/paths';
import { counted } from '../lib/words';
import { useTitle } from '../lib/use-title';

/** What a person asked to be told, each watch as its sentence. */
export function WatchesPage() {
  useTitle('Watches');
  const { data: session } = useQuery(sessionQuery);
  const { data: network } = useQuery(mapQuery);
  if (!session) return null;
  const sites = (network?.sites ?? []).flatMap(({ code, name, onHand }) =>
    onHand === null ? [] : [{ value: code, label: name }],
  );
  return (
    <>
      <Sentence
        under={
          <>
            One alert and one mail for each car while it lasts; it clears by itself.{' '}
            <Link to={paths.alerts()}>See the alerts</Link>
          </>
        }
      >
        <Asked />
      </Sentence>
      <div className="inset pb-32 pt-20">
        <p className="flex gap-12 pb-12 font-condensed text-table">
          <NewWatch session={session} sites={sites} />
        </p>
        <WatchTable session={session} sites={sites} />
      </div>
    </>
  );
}

function Asked() {
  const { data } = useInfiniteQuery(watchListQuery);
  if (!data) return 'What you asked to be told.';
  const watches = data.pages.flatMap((page) => page.data);
  const open = watches.reduce((sum, { openAlerts }) => sum + openAlerts, 0);
  if (watches.length === 0) return 'You have not asked to be told of anything.';
  return (
    <>
      You are told of {counted(watches.length, 'thing', 'things')};{' '}
      <Counted to={paths.alerts()}>
        {open === 0 ? 'nothing' : counted(open, 'alert', 'alerts')}
      </Counted>{' '}
      {open < 2 ? 'is' : 'are'} open.
    </>
  );
}
