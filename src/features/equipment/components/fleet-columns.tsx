import { AgeBar } from '../../../components/ui/age-bar';
import type { Column } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { formatDuration } from '../../../lib/durations';
import { formatInstant, zoneName } from '../../../lib/times';
import type { EquipmentItem } from '../../../lib/wire';
import { minutesThere, sayWhere } from '../where';

/** The columns of Fleet; every time in `zone`, which its heading names. */
export function fleetColumns(zone: string, now: number): Column<EquipmentItem>[] {
  return [
    {
      id: 'unit',
      heading: 'Car or box',
      width: 126,
      sort: { up: 'unit' },
      cell: (row) => <Mark>{row.display}</Mark>,
    },
    { id: 'where', heading: 'Where', cell: (row) => sayWhere(row) },
    {
      id: 'for',
      heading: 'For',
      width: 84,
      number: true,
      sort: { down: 'dwell' },
      cell: (row) => <For row={row} now={now} />,
    },
    {
      id: 'lastSeen',
      heading: `Last read, ${zoneName(zone, now)}`,
      width: 108,
      sort: { down: '-lastSeen', up: 'lastSeen' },
      cell: (row) =>
        row.lastSeen ? (
          <span className="mono text-ink-soft">{formatInstant(row.lastSeen.at, zone, now)}</span>
        ) : null,
    },
    {
      id: 'limit',
      heading: 'Against limit',
      width: 114,
      cell: (row) => <AgainstLimit row={row} now={now} />,
    },
  ];
}

/** How long, with "over" where it began before the first read. */
export function For({ row, now }: { row: EquipmentItem; now: number }) {
  const minutes = minutesThere(row, now);
  if (minutes === null) return null;
  return (
    <>
      {row.stay?.atLeast ? 'over ' : ''}
      {formatDuration(minutes)}
    </>
  );
}

function AgainstLimit({ row, now }: { row: EquipmentItem; now: number }) {
  const minutes = minutesThere(row, now);
  if (!row.stay || minutes === null) return null;
  const { limitHours, atLeast } = row.stay;
  return (
    <AgeBar
      minutes={minutes}
      limitMinutes={limitHours === null ? null : limitHours * 60}
      isAtLeast={atLeast}
    />
  );
}
