import { useInfiniteQuery } from '@tanstack/react-query';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { LedgerTable } from '../../../components/ui/ledger-table';
import type { Column } from '../../../components/ui/ledger-table';
import { MoreRows } from '../../../components/ui/more-rows';
import { formatInstant, zoneName } from '../../../lib/times';
import { formatSpeed } from '../../../lib/distances';
import { usePreferences } from '../../../lib/preferences';
import type { Preferences } from '../../../lib/preferences';
import { useMedia } from '../../../lib/use-media';
import { listed } from '../../../lib/words';
import type { SightingView } from '../../../lib/wire';
import { sightingsQuery } from '../api/sightings';
import { sayTrack } from '../where';

interface Props {
  unitId: string;
  zone: string;
  now: number;
}

/** How we know: each pass it was read in, with what read it and what that proves. */
export function UnitSightings({ unitId, zone, now }: Props) {
  const list = useInfiniteQuery(sightingsQuery(unitId));
  const isNarrow = useMedia('(max-width: 767px)');
  const { distance } = usePreferences();
  if (list.isPending) return <LoadingRows of="the passes" rows={5} />;
  if (list.isError && !list.data) {
    return (
      <ErrorNotice
        what="The passes did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  const rows = list.data.pages.flatMap(({ data }) => data.map((row) => ({ row })));
  if (rows.length === 0) return <EmptyNotice says="No reader has reported it." />;
  return (
    <>
      <LedgerTable
        caption="Passes it was read in"
        columns={sightingColumns(zone, now, distance)}
        rows={rows}
        keyOf={(row) => `${row.passId ?? row.readPoint.code} ${row.startedAt}`}
        margin={(row) => <SightingMark sighting={row} />}
        narrow={
          isNarrow
            ? (row) => <NarrowSighting row={row} zone={zone} now={now} distance={distance} />
            : undefined
        }
        scroller={null}
      />
      <MoreRows list={list} word="Earlier passes" />
    </>
  );
}

function sightingColumns(
  zone: string,
  now: number,
  distance: Preferences['distance'],
): Column<SightingView>[] {
  return [
    {
      id: 'at',
      heading: `Read, ${zoneName(zone, now)}`,
      width: 124,
      cell: (row) => <span className="mono">{formatInstant(row.startedAt, zone, now)}</span>,
    },
    { id: 'where', heading: 'By the reader', cell: sayReader },
    { id: 'what', heading: 'Which shows', wraps: true, cell: (row) => sayMeaning(row, distance) },
    { id: 'sides', heading: 'Tags that answered', width: 178, cell: saySides },
    { id: 'reads', heading: 'Reads', width: 60, number: true, cell: ({ reads }) => reads },
  ];
}

const sayReader = ({ site, readPoint, track }: SightingView): string =>
  [`${site.name}: ${readPoint.name}`, track ? sayTrack(track) : ''].filter(Boolean).join(', ');

const roles = {
  crossing: 'went by',
  presence: 'was there, direction not known',
  returned: 'came up to it and went back',
} as const;

const strays = {
  beside: 'read beside the track, not counted',
  parallel: 'heard from the next track',
} as const;

const bases = {
  sensors: 'by wheel sensors',
  antennas: 'by antennas',
  history: 'from where its cars were before and after',
} as const;

function sayMeaning(
  { role, stray, doubted, speedKmh, directionBasis }: SightingView,
  distance: Preferences['distance'],
): string {
  if (role === 'stray') return strays[stray ?? 'beside'];
  if (doubted) return 'in doubt: no train could have brought it, so it moved nothing';
  const speed = speedKmh === null ? '' : ` at ${formatSpeed(speedKmh, distance)}`;
  const how = role === 'crossing' && directionBasis ? `, direction ${bases[directionBasis]}` : '';
  return `${roles[role]}${speed}${how}`;
}

const saySides = ({ sides, antennas }: SightingView): string => {
  const by = `by ${antennas.length} antenna${antennas.length === 1 ? '' : 's'}`;
  return sides.length === 0 ? by : `${listed(sides)}, ${by}`;
};

const isProof = ({ role, doubted }: SightingView): boolean => role === 'crossing' && !doubted;

/** Solid where the pass proves a move, hollow where it only shows presence. */
function SightingMark({ sighting }: { sighting: SightingView }) {
  return (
    <svg width="30" height="14" viewBox="0 0 30 14" aria-hidden="true" className="stroke-ink">
      <circle
        cx="15"
        cy="7"
        r="3.6"
        strokeWidth="1.4"
        className={isProof(sighting) ? 'fill-ink' : 'fill-transparent'}
      />
    </svg>
  );
}

interface NarrowProps {
  row: SightingView;
  zone: string;
  now: number;
  distance: Preferences['distance'];
}

function NarrowSighting({ row, zone, now, distance }: NarrowProps) {
  return (
    <>
      <span className="mono">{formatInstant(row.startedAt, zone, now)}</span> {sayReader(row)}
      <span className="block text-ink-soft">
        {sayMeaning(row, distance)}; {saySides(row)}; {row.reads} reads
      </span>
    </>
  );
}
