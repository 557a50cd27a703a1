import type { ReactNode } from 'react';
import { Explained } from '../../../components/ui/explained';
import { Mark } from '../../../components/ui/mark';
import { StateMark, sayState } from '../../../components/ui/state-mark';
import { formatDuration } from '../../../lib/durations';
import { formatInstantInFull } from '../../../lib/times';
import { capital, sayUnseenLeads } from '../../../lib/words';
import type { EquipmentDetail } from '../../../lib/wire';
import { sayLast, sayTrack } from '../where';

interface Props {
  unit: EquipmentDetail;
  zone: string;
}

const meanings: Record<string, string> = {
  quiet: 'no read for longer than its limit while not standing at a site',
  'past its limit': 'it stands longer than the site allows',
  'en route': 'its last crossing led out to the line, or it was reported gone',
  'on hand':
    'its last crossing led into the site, or it was reported there, and nothing says it has left',
  'never read': 'no reader has read one of its tags, and nobody has reported it',
};

/** The facts of this moment, one a line. */
export function UnitNow({ unit, zone }: Props) {
  const { lastSeen, stay } = unit;
  return (
    <dl className="facts">
      <Fact name="State">
        <span className="inline-flex flex-wrap items-center gap-x-8">
          <StateMark {...unit} decorative />
          {sayState(unit)
            .split(', ')
            .map((word) => (
              <Explained key={word} means={meanings[word] ?? word}>
                {capital(word)}
              </Explained>
            ))}
        </span>
      </Fact>
      {lastSeen ? (
        <>
          <Fact name="Place">
            {lastSeen.site?.name ?? 'without a name'}
            {lastSeen.track ? `, ${sayTrack(lastSeen.track)}` : ''}
            {lastSeen.readPoint ? (
              <span className="text-ink-soft"> by the reader {lastSeen.readPoint.name}</span>
            ) : null}
          </Fact>
          <Fact name={`Last ${sayLast(lastSeen.basis)}`}>
            <span className="mono">{formatInstantInFull(lastSeen.at, zone)}</span>
          </Fact>
        </>
      ) : null}
      {stay ? (
        <Fact name={stay.arrivedAt ? 'Arrived' : 'First known there'}>
          <span className="mono">
            {formatInstantInFull(stay.arrivedAt ?? stay.firstSeenAt, zone)}
          </span>
          {stay.arrivedAt ? null : (
            <span className="text-ink-soft"> it was there before; since when was not seen</span>
          )}
        </Fact>
      ) : null}
      {stay ? (
        <Fact name="Limit there">
          {stay.limitHours === null ? 'none set' : formatDuration(stay.limitHours * 60)}
        </Fact>
      ) : null}
      {unit.unseenLeads.length > 0 && lastSeen?.site ? (
        <Fact name="Not seen there">
          {sayUnseenLeads(unit.unseenLeads)}
          <span className="text-ink-soft">: no reader stands there</span>
        </Fact>
      ) : null}
      {unit.carriedBy ? (
        <Fact name="Rides on">
          <Mark>{unit.carriedBy.display}</Mark>
        </Fact>
      ) : null}
      {unit.lengthDm ? <Fact name="Length">{sayLength(unit.lengthDm)}</Fact> : null}
      {unit.axles ? <Fact name="Axles">{unit.axles}</Fact> : null}
    </dl>
  );
}

const sayLength = (decimetres: number): string =>
  `${Math.round(decimetres / 3.048)} ft (${(decimetres / 10).toFixed(1)} m)`;

function Fact({ name, children }: { name: string; children: ReactNode }) {
  return (
    <div>
      <dt>{name}</dt>
      <dd>{children}</dd>
    </div>
  );
}
