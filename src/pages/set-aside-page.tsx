import { useState } from 'react';
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, useSearchParams } from 'react-router-dom';
import { EmptyNotice, ErrorNotice, LoadingRows, LoadingSentence } from '../components/ui/notice';
import { sessionQuery } from '../features/session/api/session';
import type { Acting } from '../features/set-aside/acting';
import { heldGroupsQuery } from '../features/set-aside/api/held-groups';
import { HeldReadTable } from '../features/set-aside/components/held-read-table';
import { HeldTagTable } from '../features/set-aside/components/held-tag-table';
import { ReasonSection } from '../features/set-aside/components/reason-section';
import { SetAsideActs } from '../features/set-aside/components/set-aside-acts';
import { SetAsideSentence } from '../features/set-aside/components/set-aside-sentence';
import { readCode, reasonOrder, reasons } from '../features/set-aside/reasons';
import { paths } from '../lib/paths';
import { useTitle } from '../lib/use-title';
import type { HeldGroupView, HoldCode } from '../lib/wire';

/** How long the screen looks often, after something was done, for its effect. */
const TAKES_EFFECT_MS = 60_000;

/** Reads that are set aside, by reason, each with the one thing that can be done. */
export function SetAsidePage() {
  useTitle('Set aside');
  const { data: session } = useQuery(sessionQuery);
  if (!session) return null;
  if (!session.sections.includes('setAside')) {
    return (
      <div className="inset py-32">
        <h1 className="pb-16 text-sentence-narrow font-normal">Set aside</h1>
        <EmptyNotice says="This is for administrators.">
          Reads that are set aside belong to no car or box yet.{' '}
          <Link to={paths.home}>Go to the first page</Link>
        </EmptyNotice>
      </div>
    );
  }
  return <SetAside zone={session.user.timeZone} />;
}

function SetAside({ zone }: { zone: string }) {
  const [quickUntil, setQuickUntil] = useState(0);
  const held = useQuery(heldGroupsQuery(quickUntil));
  const client = useQueryClient();
  const [acting, setActing] = useState<Acting | null>(null);
  const [said, setSaid] = useState('');
  const done = (says: string) => {
    setActing(null);
    setSaid(says);
    setQuickUntil(Date.now() + TAKES_EFFECT_MS);
    void client.invalidateQueries({ queryKey: ['set-aside'] });
  };
  return (
    <>
      {held.data ? (
        <SetAsideSentence counts={held.data.counts} zone={zone} />
      ) : held.isPending ? (
        <LoadingSentence />
      ) : (
        <h1 className="only-heard">Set aside</h1>
      )}
      <div className="inset pb-32 pt-20">
        <p role="status" className={said ? 'mb-16 bg-wash-verdigris px-16 py-8' : undefined}>
          {said}
        </p>
        {held.isPending ? <LoadingRows of="what is set aside" rows={6} /> : null}
        {held.isError && !held.data ? (
          <ErrorNotice
            what="What is set aside did not come"
            error={held.error}
            onRetry={() => void held.refetch()}
          />
        ) : null}
        {held.data ? <Reasons groups={held.data.data} zone={zone} onAct={setActing} /> : null}
      </div>
      {acting ? (
        <SetAsideActs acting={acting} zone={zone} onClose={() => setActing(null)} onDone={done} />
      ) : null}
    </>
  );
}

interface ReasonsProps {
  groups: HeldGroupView[];
  zone: string;
  onAct: (acting: Acting) => void;
}

/** All reasons, or the one that the address names, with its tags or reads. */
function Reasons({ groups, zone, onAct }: ReasonsProps) {
  const [parameters] = useSearchParams();
  const asked = readCode(parameters.get('code'));
  const site = parameters.get('site');
  const shown = asked === null ? reasonOrder : [asked];
  const sections = shown.flatMap((code) => {
    const own = groups.filter((group) => group.code === code);
    return own.length === 0
      ? []
      : [
          <ReasonSection
            key={code}
            code={code}
            groups={own}
            hasTags={asked !== null && hasTags(code, site)}
            zone={zone}
            onAct={onAct}
          />,
        ];
  });
  if (asked === null) return sections;
  const siteName = groups.find((group) => group.site.code === site)?.site.name ?? site;
  return (
    <>
      <p className="pb-12 font-condensed text-table">
        <Link to={paths.setAside()}>Show all reasons</Link>
      </p>
      {sections.length > 0 ? (
        sections
      ) : (
        <EmptyNotice says={`Nothing is set aside as “${reasons[asked].heading}” any more.`} />
      )}
      {sections.length > 0 ? (
        <Details code={asked} site={site} siteName={siteName} zone={zone} onAct={onAct} />
      ) : null}
    </>
  );
}

/** Where something is done tag by tag, the tags stand before the reads. */
const hasTags = (code: HoldCode, site: string | null): boolean =>
  code === 'unmapped-epc' && site === null;

interface DetailsProps {
  code: HoldCode;
  site: string | null;
  siteName: string | null;
  zone: string;
  onAct: (acting: Acting) => void;
}

function Details({ code, site, siteName, zone, onAct }: DetailsProps) {
  return (
    <>
      {hasTags(code, site) ? (
        <section className="pb-32">
          <h2 className="pb-8 text-lead">The tags</h2>
          <HeldTagTable code={code} zone={zone} onAct={onAct} />
        </section>
      ) : null}
      <section>
        <div className="flex flex-wrap items-baseline gap-x-16 pb-8">
          <h2 className="text-lead">The reads{siteName ? ` of ${siteName}` : ''}</h2>
          {site ? (
            <Link className="font-condensed text-table" to={paths.setAside({ code })}>
              of all sites
            </Link>
          ) : null}
        </div>
        <HeldReadTable key={code + (site ?? '')} code={code} site={site} zone={zone} />
      </section>
    </>
  );
}
