import { useInfiniteQuery, useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { EmptyNotice, ErrorNotice, LoadingRows, LoadingSentence } from '../components/ui/notice';
import { doubtsQuery } from '../features/doubts/api/doubts';
import { DoubtTable } from '../features/doubts/components/doubt-table';
import { DoubtsSentence } from '../features/doubts/components/doubts-sentence';
import { sessionQuery } from '../features/session/api/session';
import { paths } from '../lib/paths';
import { useTitle } from '../lib/use-title';

/** Sightings that no train could join: tags on two cars, and clocks that are wrong. */
export function DoubtsPage() {
  useTitle('Doubts');
  const { data: session } = useQuery(sessionQuery);
  if (!session) return null;
  if (!session.sections.includes('doubts')) {
    return (
      <div className="inset py-32">
        <h1 className="pb-16 text-sentence-narrow font-normal">Doubts</h1>
        <EmptyNotice says="This is for administrators.">
          What is in doubt of a car of yours stands on its own page.{' '}
          <Link to={paths.home}>Go to the first page</Link>
        </EmptyNotice>
      </div>
    );
  }
  return <Doubts zone={session.user.timeZone} />;
}

function Doubts({ zone }: { zone: string }) {
  const list = useInfiniteQuery(doubtsQuery);
  const [first] = list.data?.pages ?? [];
  const doubts = (list.data?.pages ?? []).flatMap((page) => page.data);
  if (list.isError && !first) {
    return (
      <div className="inset py-32">
        <h1 className="only-heard">Doubts</h1>
        <ErrorNotice
          what="The doubts did not come"
          error={list.error}
          onRetry={() => void list.refetch()}
        />
      </div>
    );
  }
  return (
    <>
      {first ? <DoubtsSentence counts={first.counts} /> : <LoadingSentence />}
      <div className="inset pb-32 pt-20">
        {first ? null : <LoadingRows of="the doubts" rows={6} />}
        {doubts.length > 0 ? (
          <DoubtTable
            doubts={doubts}
            zone={zone}
            onEndNear={() => {
              if (list.hasNextPage && !list.isFetching) void list.fetchNextPage();
            }}
          />
        ) : null}
      </div>
    </>
  );
}
