import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { EmptyNotice } from '../components/ui/notice';
import { RebuildTable } from '../features/rework/components/rebuild-table';
import { ReworkSentence } from '../features/rework/components/rework-sentence';
import { sessionQuery } from '../features/session/api/session';
import { paths } from '../lib/paths';
import { useTitle } from '../lib/use-title';

/** History that is made anew because something was entered otherwise. */
export function ReworkPage() {
  useTitle('Rework');
  const { data: session } = useQuery(sessionQuery);
  if (!session) return null;
  if (!session.sections.includes('rework')) {
    return (
      <div className="inset py-32">
        <h1 className="pb-16 text-sentence-narrow font-normal">Rework</h1>
        <EmptyNotice says="This is for administrators.">
          <Link to={paths.home}>Go to the first page</Link>
        </EmptyNotice>
      </div>
    );
  }
  return (
    <>
      <ReworkSentence />
      <div className="inset pb-32 pt-20">
        <RebuildTable zone={session.user.timeZone} />
      </div>
    </>
  );
}
