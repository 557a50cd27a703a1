import { Fragment } from 'react';
import { Link } from 'react-router-dom';
import { LargeMark, Mark } from '../../../components/ui/mark';
import { formatDuration } from '../../../lib/durations';
import { paths } from '../../../lib/paths';
import { formatInstant } from '../../../lib/times';
import { capital, sayKind } from '../../../lib/words';
import type { EquipmentDetail } from '../../../lib/wire';
import { minutesThere, sayLast, saySaid, sayTrack } from '../where';

interface Props {
  unit: EquipmentDetail;
  zone: string;
  now: number;
}

/** The mark, and where the car is in one sentence. */
export function UnitHeading({ unit, zone, now }: Props) {
  return (
    <div className="pt-20">
      <p className="font-condensed text-table text-ink-soft">{sayWhat(unit)}</p>
      <LargeMark>{unit.display}</LargeMark>
      <Formerly unit={unit} />
      <h1 className="mt-4 max-w-[900px] text-sentence-narrow font-normal text-pretty sm:text-sentence">
        <span className="only-heard">{unit.display}: </span>
        <Whereabouts unit={unit} zone={zone} now={now} />
      </h1>
    </div>
  );
}

/** "formerly QTKX 40127", so that who came by an old number knows that this is the car. */
function Formerly({ unit }: { unit: EquipmentDetail }) {
  const former = unit.identities.filter(({ current }) => !current);
  if (former.length === 0) return null;
  const displays = [...new Set(former.map(({ display }) => display))];
  return (
    <p className="text-ink-soft">
      formerly{' '}
      {displays.map((display, index) => (
        <Fragment key={display}>
          {index > 0 ? ', ' : null}
          <Mark>{display}</Mark>
        </Fragment>
      ))}
    </p>
  );
}

/** "Tank car of Quarrel Tank Leasing". */
function sayWhat({ kind, carType, owner, registered }: EquipmentDetail): string {
  const what = capital(carType ?? sayKind(kind));
  if (owner) return `${what} of ${owner.name}`;
  return registered ? what : `${what}, not on the register`;
}

function Whereabouts({ unit, zone, now }: Props) {
  const { lastSeen, stay, between } = unit;
  const minutes = minutesThere(unit, now);
  if (!lastSeen || minutes === null) {
    return unit.sitesOnly ? 'It was not read at a site of yours.' : 'It has never been read.';
  }
  const length = formatDuration(minutes);
  if (stay) {
    const site = lastSeen.site;
    return (
      <>
        It stands at{' '}
        {site ? <Link to={paths.fleet({ site: site.code })}>{site.name}</Link> : 'a site'}
        {lastSeen.track ? `, ${sayTrack(lastSeen.track)}` : ''}
        {saySaid(lastSeen.basis)}, {stay.atLeast ? 'for over' : 'for'}{' '}
        <b className="font-medium">{length}</b>
        {unit.pastLimit && stay.limitHours !== null ? (
          <span className="text-ochre">
            , past its limit of {formatDuration(stay.limitHours * 60)}
          </span>
        ) : null}
        .
      </>
    );
  }
  const from = between?.from ?? lastSeen.site;
  const at = formatInstant(lastSeen.at, zone, now);
  return (
    <>
      {unit.quiet ? (
        <>
          It is <span className="text-ochre">quiet</span>: not read since{' '}
        </>
      ) : (
        `It is under way, last ${sayLast(lastSeen.basis)} at `
      )}
      {from ? (
        <Link to={paths.fleet({ site: from.code })}>{from.name}</Link>
      ) : (
        'a place without a name'
      )}
      , {at}, <b className="font-medium">{length}</b> ago.
    </>
  );
}
