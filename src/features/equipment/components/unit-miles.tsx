import { useQuery } from '@tanstack/react-query';
import { ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { LedgerTable } from '../../../components/ui/ledger-table';
import { distanceHeading, formatDistance } from '../../../lib/distances';
import { usePreferences } from '../../../lib/preferences';
import { counted } from '../../../lib/words';
import { movementsQuery } from '../api/movements';
import { metresByMonth, rides } from '../journey';

const monthName = new Intl.DateTimeFormat('en-US', {
  month: 'long',
  year: 'numeric',
  timeZone: 'UTC',
});

/** Rail miles by month of arrival, all that is kept; of what rides, why there are none yet. */
export function UnitMiles({ unitId, kind }: { unitId: string; kind: string }) {
  return rides(kind) ? (
    <p>
      Not counted yet. The miles of a box are those of the cars it rides on, and which cars those
      were is not worked out yet.
    </p>
  ) : (
    <Miles unitId={unitId} />
  );
}

function Miles({ unitId }: { unitId: string }) {
  const movements = useQuery(movementsQuery(unitId, null));
  const { distance } = usePreferences();
  if (movements.isPending) return <LoadingRows of="the miles" rows={3} />;
  if (!movements.data) {
    return (
      <ErrorNotice
        what="The miles did not come"
        error={movements.error}
        onRetry={() => void movements.refetch()}
      />
    );
  }
  const { legs, railMetres } = movements.data.data;
  return (
    <>
      <p className="pb-8">
        {formatDistance(railMetres, distance)} by rail over {counted(legs.length, 'leg', 'legs')},
        by the shortest way on the route graph. Switching adds nothing.
      </p>
      {legs.length > 0 ? (
        <LedgerTable
          caption="Rail distance by month"
          columns={[
            {
              id: 'month',
              heading: 'Month of arrival, UTC',
              cell: ({ month }) => monthName.format(new Date(`${month}-15T00:00:00Z`)),
            },
            { id: 'legs', heading: 'Legs', width: 56, number: true, cell: ({ legs: n }) => n },
            {
              id: 'distance',
              heading: distanceHeading(distance),
              width: 96,
              number: true,
              cell: ({ metres }) => formatDistance(metres, distance),
            },
          ]}
          rows={metresByMonth(legs).map((row) => ({ row }))}
          keyOf={({ month }) => month}
          margin={() => null}
          scroller={null}
        />
      ) : null}
    </>
  );
}
