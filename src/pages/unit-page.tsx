import { useEffect } from 'react';
import { useQuery } from '@tanstack/react-query';
import { Link, useNavigate, useParams } from 'react-router-dom';
import { ErrorNotice, LoadingSentence } from '../components/ui/notice';
import { Sentence } from '../components/ui/sentence';
import { UnitDoubts } from '../features/doubts/components/unit-doubts';
import { unitQuery } from '../features/equipment/api/unit';
import { UnitHeading } from '../features/equipment/components/unit-heading';
import { UnitJourney, useJourneySpan } from '../features/equipment/components/unit-journey';
import { UnitMiles } from '../features/equipment/components/unit-miles';
import { UnitNow } from '../features/equipment/components/unit-now';
import { UnitReads } from '../features/equipment/components/unit-reads';
import { UnitReports } from '../features/equipment/components/unit-reports';
import { UnitSection } from '../features/equipment/components/unit-section';
import { UnitSightings } from '../features/equipment/components/unit-sightings';
import { UnitTags } from '../features/equipment/components/unit-tags';
import { mapQuery } from '../features/network/api/map';
import { sessionQuery } from '../features/session/api/session';
import { NewWatch } from '../features/watches/components/new-watch';
import { ApiProblem } from '../lib/api-problem';
import { paths } from '../lib/paths';
import { useNow } from '../lib/use-now';
import { useTitle } from '../lib/use-title';
import type { EquipmentDetailAnswer, SessionInfo } from '../lib/wire';

const chapters = [
  { id: 'now', word: 'Now' },
  { id: 'how-we-know', word: 'How we know' },
  { id: 'reports', word: 'Reports' },
  { id: 'journey', word: 'Journey' },
  { id: 'miles', word: 'Miles' },
  { id: 'tags', word: 'Tags and marks' },
  { id: 'reads', word: 'Raw reads' },
];

/** One car or box: one document, its contents in the margin. */
export function UnitPage() {
  const { unitId = '' } = useParams();
  const unit = useQuery(unitQuery(unitId));
  const { data: session } = useQuery(sessionQuery);
  const current = unit.data?.data.unitId;
  useTitle(unit.data?.data.display ?? unitId);
  useCurrentAddress(unitId, current);
  if (unit.isPending || !session) return <LoadingSentence />;
  if (unit.error instanceof ApiProblem && unit.error.status === 404) {
    return (
      <Sentence
        under={
          <>
            It may be written otherwise, or it was never at a site of yours.{' '}
            <Link to={paths.fleet()}>Go to Fleet</Link>
          </>
        }
      >
        <span className="font-mono">{unitId}</span> is not a car or box you may see.
      </Sentence>
    );
  }
  if (!unit.data) {
    return (
      <div className="inset py-32">
        <ErrorNotice
          what="The car did not come"
          error={unit.error}
          onRetry={() => void unit.refetch()}
        />
      </div>
    );
  }
  return <UnitDocument key={current} answer={unit.data} session={session} />;
}

/** Former identities answer with the current one: the address follows. */
function useCurrentAddress(asked: string, current: string | undefined) {
  const navigate = useNavigate();
  useEffect(() => {
    if (current && current !== asked) void navigate(paths.equipment(current), { replace: true });
  }, [asked, current, navigate]);
}

interface DocumentProps {
  answer: EquipmentDetailAnswer;
  session: SessionInfo;
}

function UnitDocument({ answer: { data: unit, can }, session }: DocumentProps) {
  const zone = session.user.timeZone;
  const now = useNow();
  const span = useJourneySpan(now);
  const { data: network } = useQuery(mapQuery);
  const sites = (network?.sites ?? []).map(({ code, name }) => ({ value: code, label: name }));
  return (
    <div className="inset grid gap-x-52 lg:grid-cols-[132px_minmax(0,980px)]">
      <nav
        aria-label="Contents of this page"
        className="hidden pt-24 font-condensed text-table lg:sticky lg:top-48 lg:block lg:self-start"
      >
        <ul className="flex flex-col gap-8">
          {chapters.map(({ id, word }) => (
            <li key={id}>
              <a href={`#${id}`}>{word}</a>
            </li>
          ))}
        </ul>
      </nav>
      <div className="min-w-0">
        <UnitHeading unit={unit} zone={zone} now={now} />
        <p className="flex flex-wrap gap-12 pb-32 pt-8 font-condensed text-table">
          {can.watch ? <NewWatch session={session} sites={sites} unit={unit.display} /> : null}
          {unit.sitesOnly ? (
            <span className="text-ink-soft">You see what happened at your sites.</span>
          ) : null}
        </p>
        <UnitSection id="now" heading="Now">
          <UnitNow unit={unit} zone={zone} />
        </UnitSection>
        <UnitSection id="how-we-know" heading="How we know">
          <UnitDoubts unitId={unit.unitId} zone={zone} now={now} />
          <UnitSightings unitId={unit.unitId} zone={zone} now={now} />
        </UnitSection>
        <UnitSection id="reports" heading="Reports">
          <UnitReports unit={unit} zone={zone} now={now} />
        </UnitSection>
        <UnitSection id="journey" heading="Journey" aside={span.choice}>
          <UnitJourney unitId={unit.unitId} zone={zone} now={now} from={span.from} />
        </UnitSection>
        <UnitSection id="miles" heading="Miles">
          <UnitMiles unitId={unit.unitId} kind={unit.kind} />
        </UnitSection>
        <UnitSection id="tags" heading="Tags and marks">
          <UnitTags unit={unit} zone={zone} now={now} />
        </UnitSection>
        <UnitSection id="reads" heading="Raw reads">
          <UnitReads unitId={unit.unitId} zone={zone} />
        </UnitSection>
      </div>
    </div>
  );
}
