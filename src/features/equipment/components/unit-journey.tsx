import { useState } from 'react';
import { useQuery } from '@tanstack/react-query';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { LedgerTable } from '../../../components/ui/ledger-table';
import { usePreferences } from '../../../lib/preferences';
import { useMedia } from '../../../lib/use-media';
import type { MovementsAnswer } from '../../../lib/wire';
import { movementsQuery } from '../api/movements';
import { journeyLines } from '../journey';
import { JourneyMark, NarrowJourney, journeyColumns } from './journey-columns';

interface Props {
  unitId: string;
  zone: string;
  now: number;
  /** Where the journey begins; null: all that is kept. */
  from: string | null;
}

/** Stays and legs, newest first; solid what was read, hollow what is reckoned or may yet be taken back. */
export function UnitJourney({ unitId, zone, now, from }: Props) {
  const movements = useQuery(movementsQuery(unitId, from));
  const { distance } = usePreferences();
  const isNarrow = useMedia('(max-width: 767px)');
  if (movements.isPending) return <LoadingRows of="the journey" rows={8} />;
  if (!movements.data) {
    return (
      <ErrorNotice
        what="The journey did not come"
        error={movements.error}
        onRetry={() => void movements.refetch()}
      />
    );
  }
  const lines = journeyLines(movements.data.data.stays, movements.data.data.legs);
  if (lines.length === 0) {
    return <EmptyNotice says="It has not been at a site in this time." />;
  }
  return (
    <>
      <LedgerTable
        caption="Stays and legs"
        columns={journeyColumns(zone, now, distance)}
        rows={lines.map((row) => ({ row }))}
        keyOf={(line) => line.id}
        margin={(line) => <JourneyMark line={line} />}
        narrow={
          isNarrow
            ? (line) => <NarrowJourney line={line} zone={zone} now={now} distance={distance} />
            : undefined
        }
        scroller={null}
      />
      <Capped movements={movements.data} />
    </>
  );
}

function Capped({ movements }: { movements: MovementsAnswer }) {
  return movements.next ? (
    <p className="pt-8 text-table text-ink-soft">
      These are the first {movements.data.stays.length} stays of this time; later ones are left out.
    </p>
  ) : null;
}

/** Which time the journey covers, as words to choose from. */
export function useJourneySpan(now: number) {
  const [days, setDays] = useState<number | null>(30);
  const [anchor] = useState(now);
  const from = days === null ? null : new Date(anchor - days * 86_400_000).toISOString();
  const choice = (
    <span className="flex gap-12 pt-8">
      {[30, 90, null].map((span) => (
        <button
          key={String(span)}
          type="button"
          className={`link ${span === days ? 'font-semibold text-ink decoration-2' : ''}`}
          aria-pressed={span === days}
          onClick={() => setDays(span)}
        >
          {span === null ? 'all that is kept' : `${span} days`}
        </button>
      ))}
    </span>
  );
  return { from, choice };
}
