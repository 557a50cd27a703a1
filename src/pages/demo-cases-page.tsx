import { useQuery } from '@tanstack/react-query';
import { ErrorNotice, LoadingRows, LoadingSentence } from '../components/ui/notice';
import { Sentence } from '../components/ui/sentence';
import { demoCasesQuery } from '../features/demo/api/demo-cases';
import { CaseList } from '../features/demo/components/case-list';
import { sessionQuery } from '../features/session/api/session';
import { paths } from '../lib/paths';
import { useTitle } from '../lib/use-title';
import { counted } from '../lib/words';

/** What the demo shows of a railway's troubles, and where to look. */
export function DemoCasesPage() {
  useTitle('What to look at');
  const { data: session } = useQuery(sessionQuery);
  const cases = useQuery(demoCasesQuery);
  if (!session) return null;
  if (cases.isError && !cases.data) {
    return (
      <div className="inset py-32">
        <h1 className="only-heard">What to look at</h1>
        <ErrorNotice
          what="The list did not come"
          error={cases.error}
          onRetry={() => void cases.refetch()}
        />
      </div>
    );
  }
  return (
    <>
      {cases.data ? (
        <Sentence under={<Under hasClosed={hasClosed(cases.data.data)} />}>
          This demo shows {counted(cases.data.data.length, 'case', 'cases')} that make reads hard to
          believe, each on a car of its own.
        </Sentence>
      ) : (
        <LoadingSentence />
      )}
      <div className="inset pb-32 pt-20">
        {cases.data ? (
          <CaseList cases={cases.data.data} sections={session.sections} />
        ) : (
          <LoadingRows of="what to look at" rows={12} />
        )}
      </div>
    </>
  );
}

const hasClosed = (cases: { cars: { opens: boolean }[] }[]) =>
  cases.some(({ cars }) => cars.some(({ opens }) => !opens));

function Under({ hasClosed }: { hasClosed: boolean }) {
  return (
    <>
      Most of them repeat every four days on the branch west of Alder Bend.{' '}
      {hasClosed ? 'Cars without a link are not yours to open; the administrator opens all. ' : ''}
      Mail of the demo is in its <a href={paths.demoMailbox}>mailbox</a>.
    </>
  );
}
