import { Link } from 'react-router-dom';
import { AgeBar } from '../../../components/ui/age-bar';
import type { Column } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { minutesSince } from '../../../lib/durations';
import { paths } from '../../../lib/paths';
import { formatInstant, zoneName } from '../../../lib/times';
import type { AlertState, AlertView } from '../../../lib/wire';
import { sayAlert, sayCleared, sayLength } from '../say-alert';
import { TakeAlert } from './take-alert';

/** The columns of Alerts in one state; every time in `zone`, which the headings name. */
export function alertColumns(state: AlertState, zone: string, now: number): Column<AlertView>[] {
  const time = (instant: string) => (
    <span className="mono text-ink-soft">{formatInstant(instant, zone, now)}</span>
  );
  const name = zoneName(zone, now);
  const common: Column<AlertView>[] = [
    { id: 'unit', heading: 'Car or box', width: 142, cell: (row) => <Mark>{row.display}</Mark> },
    { id: 'what', heading: 'What', cell: sayAlert },
    { id: 'for', heading: 'For', width: 104, number: true, cell: (row) => sayLength(row, now) },
  ];
  const watch: Column<AlertView> = {
    id: 'watch',
    heading: 'Watch',
    cell: (row) => <Link to={paths.alerts({ state, watch: row.watch.id })}>{row.watch.name}</Link>,
  };
  if (state === 'cleared') {
    return [
      ...common,
      { id: 'because', heading: 'Cleared because', width: 132, cell: sayCleared },
      {
        id: 'cleared',
        heading: `Cleared, ${name}`,
        width: 116,
        cell: (row) => (row.cleared ? time(row.cleared.at) : null),
      },
      watch,
    ];
  }
  return [
    ...common,
    {
      id: 'limit',
      heading: 'Against its limit',
      width: 118,
      cell: (row) => <Limit row={row} now={now} />,
    },
    { id: 'raised', heading: `Raised, ${name}`, width: 116, cell: (row) => time(row.raisedAt) },
    watch,
    {
      id: 'act',
      heading: 'Taken',
      width: 190,
      cell: (row) => <TakeAlert alert={row} zone={zone} />,
    },
  ];
}

function Limit({ row, now }: { row: AlertView; now: number }) {
  return (
    <AgeBar
      minutes={minutesSince(row.since, now)}
      limitMinutes={row.hours * 60}
      isAtLeast={row.atLeast}
    />
  );
}
