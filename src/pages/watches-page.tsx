import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { Sentence } from '../components/ui/sentence';
import { mapQuery } from '../features/network/api/map';
import { sessionQuery } from '../features/session/api/session';
import { NewWatch } from '../features/watches/components/new-watch';
import { WatchTable } from '../features/watches/components/watch-table';
import { paths } from '../lib/paths';
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
        You are told when one of these comes true.
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
