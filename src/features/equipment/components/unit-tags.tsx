import { LedgerTable } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { formatInstant, zoneName } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import type { EquipmentDetail } from '../../../lib/wire';

interface Props {
  unit: EquipmentDetail;
  zone: string;
  now: number;
}

/** The tags registered for the car, and the numbers it has carried. */
export function UnitTags({ unit, zone, now }: Props) {
  const time = (instant: string | null, otherwise: string) =>
    instant ? <span className="mono">{formatInstant(instant, zone, now)}</span> : otherwise;
  const isNarrow = useMedia('(max-width: 767px)');
  const former = unit.identities.filter(({ current }) => !current);
  return (
    <>
      {unit.tags.length === 0 ? (
        <p>No tag is registered for it. Tags that spell its number are taken as its own.</p>
      ) : (
        <LedgerTable
          caption="Tags"
          columns={[
            {
              id: 'value',
              heading: 'Tag',
              cell: ({ value }) => <span className="mono text-note">{value}</span>,
            },
            { id: 'side', heading: 'Side', width: 64, cell: ({ side }) => side ?? 'not said' },
            {
              id: 'from',
              heading: `From, ${zoneName(zone, now)}`,
              width: 116,
              cell: ({ validFrom }) => time(validFrom, 'the first'),
            },
            { id: 'to', heading: 'To', width: 116, cell: ({ validTo }) => time(validTo, 'now') },
          ]}
          rows={unit.tags.map((row) => ({ row }))}
          keyOf={({ value, validFrom }) => value + (validFrom ?? '')}
          margin={() => null}
          narrow={
            isNarrow
              ? ({ value, side, validTo }) => (
                  <>
                    <span className="mono text-note break-all whitespace-normal">{value}</span>
                    <span className="block text-ink-soft">
                      {side ?? 'side not said'}, valid to {time(validTo, 'now')}
                    </span>
                  </>
                )
              : undefined
          }
          scroller={null}
        />
      )}
      {former.length > 0 ? (
        <p className="pt-12">
          Before that it carried{' '}
          {former.map(({ unitId, display }) => (
            <span key={unitId} className="mr-8">
              <Mark>{display}</Mark>
            </span>
          ))}
        </p>
      ) : null}
    </>
  );
}
