import { useCallback, useMemo, useState } from 'react';
import { useQuery } from '@tanstack/react-query';
import { useNavigate, useSearchParams } from 'react-router-dom';
import { Divider } from '../components/ui/plate';
import { ErrorNotice, LoadingSentence } from '../components/ui/notice';
import { fleetSummaryQuery } from '../features/equipment/api/fleet-summary';
import { DropFilters } from '../features/equipment/components/drop-filters';
import { FilterWords } from '../features/equipment/components/filter-words';
import { FleetSentence } from '../features/equipment/components/fleet-sentence';
import { FleetTable } from '../features/equipment/components/fleet-table';
import { mapQuery } from '../features/network/api/map';
import { NetworkPanel } from '../features/network/components/network-panel';
import { sessionQuery } from '../features/session/api/session';
import { NewWatch } from '../features/watches/components/new-watch';
import { ageWord, useFreshness } from '../lib/live';
import { paths, readFleetFilter } from '../lib/paths';
import type { FleetFilter } from '../lib/paths';
import { setPreferences, usePreferences } from '../lib/preferences';
import { useMedia } from '../lib/use-media';
import { useNow } from '../lib/use-now';
import { useTitle } from '../lib/use-title';
import { sayUnseenLeads } from '../lib/words';

/** With fewer than this the table stands alone. */
const worthAMap = 30;

/** Fleet: the answer in a sentence, the map, the ledger. */
export function FleetPage() {
  useTitle('Fleet');
  const summary = useQuery(fleetSummaryQuery);
  const isBeside = useMedia('(min-width: 1024px)');
  const hasMap = (summary.data?.total ?? worthAMap) >= worthAMap;
  return (
    <div className="flex flex-col lg:h-[calc(100dvh-92px)] lg:min-h-[560px] print:h-auto">
      <Opening />
      {summary.data?.total === 0 ? null : (
        <div className="inset flex min-h-0 flex-1 flex-col pb-24 pt-20 lg:flex-row">
          {hasMap && isBeside ? <MapBeside /> : null}
          <LedgerPanel isBeside={isBeside} hasMap={hasMap} />
        </div>
      )}
    </div>
  );
}

function useFilter() {
  const [parameters] = useSearchParams();
  const navigate = useNavigate();
  const filter = useMemo(() => readFleetFilter(parameters), [parameters]);
  const change = useCallback(
    (part: Partial<FleetFilter>) =>
      void navigate(paths.fleet({ ...filter, ...part }), { preventScrollReset: true }),
    [filter, navigate],
  );
  const chooseSite = useCallback(
    (site: string) => change({ site: filter.site === site ? '' : site }),
    [change, filter.site],
  );
  return { filter, change, chooseSite };
}

function Opening() {
  const summary = useQuery(fleetSummaryQuery);
  const { data: session } = useQuery(sessionQuery);
  const freshness = useFreshness();
  const now = useNow();
  if (summary.isPending) return <LoadingSentence />;
  if (!summary.data) {
    return (
      <div className="inset pt-20">
        <ErrorNotice
          what="The counts did not come"
          error={summary.error}
          onRetry={() => void summary.refetch()}
        />
      </div>
    );
  }
  const isPast = ageWord(freshness, now) === 'past';
  const zone = session?.user.timeZone ?? 'UTC';
  return (
    <FleetSentence
      summary={summary.data}
      isOwner={session?.user.roles.includes('owner') ?? false}
      seesAllSites={session?.user.roles.includes('administrator') ?? false}
      pastSince={isPast ? { at: Date.parse(summary.data.asOf), zone } : null}
    />
  );
}

function MapBeside() {
  const { filter, chooseSite } = useFilter();
  const { mapShare } = usePreferences();
  return (
    <>
      <div
        className="flex min-w-0 flex-none flex-col"
        style={{ width: `calc(${mapShare}% - 12px)` }}
      >
        <NetworkPanel chosen={filter.site} onChoose={chooseSite} />
      </div>
      <Divider
        label="Width of the map"
        share={mapShare}
        onMove={(share) => setPreferences({ mapShare: share })}
      />
    </>
  );
}

function LedgerPanel({ isBeside, hasMap }: { isBeside: boolean; hasMap: boolean }) {
  const { filter, change, chooseSite } = useFilter();
  const { data: session } = useQuery(sessionQuery);
  const { data: network } = useQuery(mapQuery);
  const [scroller, setScroller] = useState<HTMLElement | null>(null);
  const [isMapOpen, setMapOpen] = useState(false);
  const sites = (network?.sites ?? []).flatMap(({ code, name, onHand }) =>
    onHand === null ? [] : [{ value: code, label: name }],
  );
  const unseen = network?.sites.find(({ code }) => code === filter.site)?.unseenLeads ?? [];
  return (
    <section aria-label="Cars and boxes" className="flex min-h-0 min-w-0 flex-1 flex-col">
      <div className="flex flex-wrap items-baseline justify-between gap-x-20 gap-y-4 pb-8">
        <FilterWords filter={filter} sites={sites} onSearch={(search) => change({ search })} />
        <span className="flex gap-12 font-condensed text-table">
          {hasMap && !isBeside ? (
            <button
              type="button"
              className="link"
              aria-expanded={isMapOpen}
              onClick={() => setMapOpen(!isMapOpen)}
            >
              {isMapOpen ? 'Put the map away' : 'Show the map'}
            </button>
          ) : null}
          {session ? <NewWatch session={session} filter={filter} sites={sites} /> : null}
        </span>
      </div>
      {unseen.length > 0 ? (
        <p className="pb-8 font-condensed text-table text-ink-soft">{sayUnseenLeads(unseen)}.</p>
      ) : null}
      {isMapOpen && !isBeside ? (
        <div className="mb-16 flex h-[380px] flex-col">
          <NetworkPanel chosen={filter.site} onChoose={chooseSite} />
        </div>
      ) : null}
      <div ref={isBeside ? setScroller : undefined} className="min-h-0 flex-1 lg:overflow-auto">
        <FleetTable
          key={JSON.stringify(filter)}
          filter={filter}
          zone={session?.user.timeZone ?? 'UTC'}
          scroller={isBeside ? scroller : null}
          onSort={(sort) => change({ sort })}
          dropFilters={<DropFilters filter={filter} sites={sites} />}
        />
      </div>
    </section>
  );
}
