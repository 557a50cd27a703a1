import { useQuery } from '@tanstack/react-query';
import { usePreferences } from '../../../lib/preferences';
import { formatInstant } from '../../../lib/times';
import { capital } from '../../../lib/words';
import type { DoubtView } from '../../../lib/wire';
import { unitDoubtsQuery } from '../api/doubts';
import { sayApart, sayCause, sayOutcome } from '../say-doubt';

interface Props {
  unitId: string;
  zone: string;
  now: number;
}

/** Sightings of a car that no train could join; nothing where there are none. */
export function UnitDoubts({ unitId, zone, now }: Props) {
  const { data } = useQuery(unitDoubtsQuery(unitId));
  if (!data || data.data.length === 0) return null;
  return (
    <ul aria-label="Sightings that no train could join" className="mb-16 flex flex-col gap-8">
      {data.data.map((doubt) => (
        <li
          key={`${doubt.readPoint.code} ${doubt.at}`}
          className={`border-l-[3px] px-16 py-8 ${doubt.corroboratedBy ? 'border-rule-strong' : 'border-oxide bg-wash-oxide'}`}
        >
          <Doubt doubt={doubt} zone={zone} now={now} />
        </li>
      ))}
      {data.next ? <li className="text-ink-soft">Earlier ones are left out.</li> : null}
    </ul>
  );
}

function Doubt({ doubt, zone, now }: { doubt: DoubtView; zone: string; now: number }) {
  const { distance } = usePreferences();
  const { at, site, previous } = doubt;
  const time = (instant: string) => (
    <span className="mono">{formatInstant(instant, zone, now)}</span>
  );
  return (
    <>
      Two sightings that no train could join:{' '}
      {previous ? (
        <>
          {previous.site.name}, {time(previous.at)}, then {site.name}, {time(at)},{' '}
          {sayApart(doubt, distance)}.
        </>
      ) : (
        <>
          {site.name}, {time(at)}, too soon after a place that is not yours.
        </>
      )}{' '}
      {sayOutcome(doubt)}.{doubt.corroboratedBy ? null : ` ${capital(sayCause(doubt))}.`}
    </>
  );
}
