import type { Column } from '../../../components/ui/ledger-table';
import { formatDuration } from '../../../lib/durations';
import { distanceHeading, formatDistance } from '../../../lib/distances';
import type { Preferences } from '../../../lib/preferences';
import { formatInstant, zoneName } from '../../../lib/times';
import type { LegView, StayView } from '../../../lib/wire';
import type { JourneyLine } from '../journey';
import { sayKnownTime } from '../known-time';
import { sayTrack } from '../where';

/** Columns of the journey; times in `zone`, which the headings name. */
export function journeyColumns(
  zone: string,
  now: number,
  distance: Preferences['distance'],
): Column<JourneyLine>[] {
  const name = zoneName(zone, now);
  return [
    { id: 'where', heading: 'Where', wraps: true, cell: (line) => <Where line={line} /> },
    {
      id: 'from',
      heading: `From, ${name}`,
      width: 150,
      cell: (line) => <From line={line} zone={zone} now={now} />,
    },
    {
      id: 'to',
      heading: `To, ${name}`,
      width: 150,
      cell: (line) => <To line={line} zone={zone} now={now} />,
    },
    { id: 'for', heading: 'For', width: 96, number: true, cell: sayFor },
    {
      id: 'distance',
      heading: distanceHeading(distance),
      width: 84,
      number: true,
      cell: (line) => (line.kind === 'leg' ? sayMiles(line.leg, distance) : null),
    },
    {
      id: 'how',
      heading: 'How known',
      wraps: true,
      cell: (line) => <span className="text-ink-soft">{sayHow(line, zone, now)}</span>,
    },
  ];
}

function Where({ line }: { line: JourneyLine }) {
  if (line.kind === 'leg') {
    return (
      <span className="text-ink-soft">
        {line.leg.from.name} to {line.leg.to.name}
      </span>
    );
  }
  const { site, track, through } = line.stay;
  return (
    <>
      {site.name}
      {track ? `, ${sayTrack(track)}` : ''}
      {through ? <span className="text-ink-soft">, passing through</span> : null}
    </>
  );
}

interface TimeProps {
  line: JourneyLine;
  zone: string;
  now: number;
}

function From({ line, zone, now }: TimeProps) {
  if (line.kind === 'leg')
    return (
      <span className="mono text-ink-soft">{formatInstant(line.leg.departedAt, zone, now)}</span>
    );
  return <span className="mono">{sayKnownTime(arrivalOf(line.stay), zone, now).said}</span>;
}

function To({ line, zone, now }: TimeProps) {
  if (line.kind === 'leg') {
    return (
      <span className="mono text-ink-soft">
        {line.leg.arrivedAt ? formatInstant(line.leg.arrivedAt, zone, now) : 'not seen'}
      </span>
    );
  }
  const { said } = sayKnownTime(departureOf(line.stay), zone, now);
  return said ? (
    <span className="mono">{said}</span>
  ) : (
    <span className="text-ink-soft">still there</span>
  );
}

const arrivalOf = (stay: StayView) => ({
  at: stay.arrivedAt,
  basis: stay.arrivalBasis,
  bounds: stay.arrivalBounds,
  provisional: stay.arrivalProvisional,
});

const departureOf = (stay: StayView) => ({
  at: stay.departedAt,
  basis: stay.departureBasis,
  bounds: stay.departureBounds,
  provisional: stay.departureProvisional,
});

function sayFor(line: JourneyLine): string {
  if (line.kind === 'stay') {
    return `${line.stay.atLeast ? 'over ' : ''}${formatDuration(line.stay.dwellMinutes)}`;
  }
  const { minutes } = line.leg;
  if (minutes === null) return '';
  return minutes < 0 ? 'clocks differ' : formatDuration(minutes);
}

/** Nothing where no miles are counted: a box rides, and on what is not worked out yet. */
const sayMiles = (leg: LegView, distance: Preferences['distance']): string =>
  leg.railMetres === 0
    ? ''
    : `${leg.estimated ? 'about ' : ''}${formatDistance(leg.railMetres, distance)}`;

/** How both ends are known: one phrase when they are known alike. */
function sayHow(line: JourneyLine, zone: string, now: number): string {
  if (line.kind === 'leg') return line.leg.estimated ? 'two routes are about as long' : '';
  const { stay } = line;
  const came = sayKnownTime(arrivalOf(stay), zone, now).how;
  const left = stay.departedAt ? sayKnownTime(departureOf(stay), zone, now).how : '';
  const out =
    stay.excursions === 0
      ? ''
      : `; out over the lead and back ${stay.excursions === 1 ? 'once' : `${stay.excursions} times`}`;
  if (left === '' || left === came) return came + out;
  return `came: ${came}; left: ${left}${out}`;
}

/** True where an end was said, reckoned or not seen, or may yet be taken back. */
const isReckoned = ({ arrivalBasis, departureBasis, provisional }: StayView): boolean =>
  provisional || arrivalBasis !== 'read' || (departureBasis !== null && departureBasis !== 'read');

const sayStay = (stay: StayView): string =>
  isReckoned(stay)
    ? 'a stay, partly said or reckoned'
    : stay.departedAt
      ? 'a stay, read at both ends'
      : 'a stay, read as it began';

/** A stay as a bar on a line, a leg as a thin stroke; hollow where an end was not read or is provisional. */
export function JourneyMark({ line }: { line: JourneyLine }) {
  if (line.kind === 'leg') {
    return (
      <svg
        width="30"
        height="14"
        viewBox="0 0 30 14"
        aria-hidden="true"
        className="stroke-ink-soft"
      >
        <path d="M15 0v14" strokeWidth="1.2" />
      </svg>
    );
  }
  const hollow = isReckoned(line.stay);
  return (
    <svg
      width="30"
      height="14"
      viewBox="0 0 30 14"
      role="img"
      aria-label={sayStay(line.stay)}
      className={`stroke-ink ${hollow ? 'fill-transparent' : 'fill-ink'}`}
    >
      <path d="M6.5 3h17v7h-17z" />
      <path d="M2 12.5h26" />
    </svg>
  );
}

interface NarrowProps extends TimeProps {
  distance: Preferences['distance'];
}

/** The same in two lines, for a phone. */
export function NarrowJourney({ line, zone, now, distance }: NarrowProps) {
  return (
    <>
      <span className="flex justify-between gap-12">
        <span>
          <Where line={line} />
        </span>
        <span className="flex-none">
          {sayFor(line)}
          {line.kind === 'leg' && line.leg.railMetres > 0
            ? `, ${sayMiles(line.leg, distance)}`
            : ''}
        </span>
      </span>
      {line.kind === 'stay' ? (
        <span className="block text-ink-soft">
          <From line={line} zone={zone} now={now} /> to <To line={line} zone={zone} now={now} />;{' '}
          {sayHow(line, zone, now)}
        </span>
      ) : null}
    </>
  );
}
