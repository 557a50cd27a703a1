import { LedgerTable } from '../../../components/ui/ledger-table';
import type { Column } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { formatInstant, zoneName } from '../../../lib/times';
import { useMedia } from '../../../lib/use-media';
import type { EquipmentDetail } from '../../../lib/wire';

interface Props {
  unit: EquipmentDetail;
  zone: string;
  now: number;
}

type Tag = EquipmentDetail['tags'][number];
type Identity = EquipmentDetail['identities'][number];

/** The tags registered for the car and the numbers it has carried, each with its time. */
export function UnitTags({ unit, zone, now }: Props) {
  const isNarrow = useMedia('(max-width: 767px)');
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
            ...timeColumns<Tag>(zone, now),
          ]}
          rows={unit.tags.map((row) => ({ row }))}
          keyOf={({ value, validFrom }) => value + (validFrom ?? '')}
          margin={() => null}
          narrow={
            isNarrow
              ? (tag) => (
                  <>
                    <span className="mono text-note break-all whitespace-normal">{tag.value}</span>
                    <span className="block text-ink-soft">
                      {tag.side ?? 'side not said'}; <Times of={tag} zone={zone} now={now} />
                    </span>
                  </>
                )
              : undefined
          }
          scroller={null}
        />
      )}
      {unit.identities.length > 1 ? <Marks unit={unit} zone={zone} now={now} /> : null}
    </>
  );
}

function Marks({ unit, zone, now }: Props) {
  const isNarrow = useMedia('(max-width: 767px)');
  return (
    <div className="pt-20">
      <LedgerTable
        caption="Marks and numbers"
        columns={[
          {
            id: 'number',
            heading: 'Mark and number',
            cell: ({ display }) => <Mark>{display}</Mark>,
          },
          ...timeColumns<Identity>(zone, now),
        ]}
        rows={unit.identities.map((row) => ({ row }))}
        keyOf={({ unitId, validFrom }) => unitId + (validFrom ?? '')}
        margin={() => null}
        narrow={
          isNarrow
            ? (identity) => (
                <>
                  <Mark>{identity.display}</Mark>
                  <span className="block text-ink-soft">
                    <Times of={identity} zone={zone} now={now} />
                  </span>
                </>
              )
            : undefined
        }
        scroller={null}
      />
    </div>
  );
}

interface Validity {
  validFrom: string | null;
  validTo: string | null;
}

/** From, to, and whether that is now, gone or to come. */
function timeColumns<Row extends Validity>(zone: string, now: number): Column<Row>[] {
  const time = (instant: string | null, otherwise: string) =>
    instant ? <span className="mono">{formatInstant(instant, zone, now)}</span> : otherwise;
  return [
    {
      id: 'from',
      heading: `From, ${zoneName(zone, now)}`,
      width: 132,
      cell: ({ validFrom }) => time(validFrom, 'the first'),
    },
    { id: 'to', heading: 'To', width: 132, cell: ({ validTo }) => time(validTo, 'further on') },
    {
      id: 'standing',
      heading: 'Is',
      width: 72,
      cell: (row) => <span className="text-ink-soft">{sayStanding(row, now)}</span>,
    },
  ];
}

function Times({ of, zone, now }: { of: Validity; zone: string; now: number }) {
  const { validFrom, validTo } = of;
  const time = (instant: string) => (
    <span className="mono">{formatInstant(instant, zone, now)}</span>
  );
  return (
    <>
      {sayStanding(of, now)}
      {validFrom ? <>, from {time(validFrom)}</> : null}
      {validTo ? <>, to {time(validTo)}</> : null}
    </>
  );
}

function sayStanding({ validFrom, validTo }: Validity, now: number): string {
  if (validTo && Date.parse(validTo) <= now) return 'former';
  return validFrom && Date.parse(validFrom) > now ? 'to come' : 'present';
}
