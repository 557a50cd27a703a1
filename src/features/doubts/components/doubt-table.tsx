import type { Column } from '../../../components/ui/ledger-table';
import { LedgerTable } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { usePreferences, type Preferences } from '../../../lib/preferences';
import { paths } from '../../../lib/paths';
import { formatInstant, zoneName } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import type { DoubtView } from '../../../lib/wire';
import { sayApart, sayCause } from '../say-doubt';

interface Props {
  doubts: readonly DoubtView[];
  zone: string;
  onEndNear: () => void;
}

/** Sightings that fit no train as a ledger; each leads to its car. */
export function DoubtTable({ doubts, zone, onEndNear }: Props) {
  const now = useNow();
  const isNarrow = useMedia('(max-width: 767px)');
  const { distance } = usePreferences();
  return (
    <LedgerTable
      caption="Sightings that fit no train"
      columns={doubtColumns(zone, now, distance)}
      rows={doubts.map((row) => ({ row }))}
      keyOf={(row) => `${row.unitId} ${row.readPoint.code} ${row.at}`}
      margin={() => <DoubtMark />}
      linkOf={(row) => paths.equipment(row.unitId)}
      narrow={
        isNarrow
          ? (row) => (
              <>
                <Mark>{row.display}</Mark> at {row.site.name},{' '}
                <span className="mono">{formatInstant(row.at, zone, now)}</span>
                <span className="block text-ink-soft">
                  after {row.previous?.site.name}, {sayApart(row, distance)}; {sayCause(row)}
                </span>
              </>
            )
          : undefined
      }
      scroller={null}
      onEndNear={onEndNear}
    />
  );
}

function doubtColumns(
  zone: string,
  now: number,
  distance: Preferences['distance'],
): Column<DoubtView>[] {
  const name = zoneName(zone, now);
  const time = (instant: string | undefined) =>
    instant ? <span className="mono">{formatInstant(instant, zone, now)}</span> : null;
  return [
    { id: 'unit', heading: 'Car or box', width: 142, cell: (row) => <Mark>{row.display}</Mark> },
    { id: 'at', heading: `Read, ${name}`, width: 124, cell: (row) => time(row.at) },
    { id: 'where', heading: 'At', cell: (row) => `${row.site.name}: ${row.readPoint.name}` },
    { id: 'before', heading: `Before, ${name}`, width: 124, cell: (row) => time(row.previous?.at) },
    { id: 'from', heading: 'At', cell: (row) => row.previous?.site.name },
    { id: 'apart', heading: 'Apart', width: 190, cell: (row) => sayApart(row, distance) },
    { id: 'cause', heading: 'Why', wraps: true, cell: sayCause },
  ];
}

/** Two places and no line between them. */
function DoubtMark() {
  return (
    <svg
      width="30"
      height="14"
      viewBox="0 0 30 14"
      aria-hidden="true"
      className="fill-transparent stroke-oxide"
    >
      <circle cx="7" cy="7" r="3.4" strokeWidth="1.4" />
      <circle cx="23" cy="7" r="3.4" strokeWidth="1.4" />
    </svg>
  );
}
