import { useState } from 'react';
import { useInfiniteQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { LedgerTable } from '../../../components/ui/ledger-table';
import type { Column } from '../../../components/ui/ledger-table';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import type { Choice } from '../../../components/ui/options';
import { StateMark } from '../../../components/ui/state-mark';
import { paths } from '../../../lib/paths';
import { useMedia } from '../../../lib/use-media';
import type { SessionInfo, WatchListAnswer } from '../../../lib/wire';
import { watchListQuery } from '../api/watch-list';
import { sayWatch } from '../say-watch';
import { ChangeWatch } from './change-watch';
import { EndWatch } from './end-watch';

type WatchRow = WatchListAnswer['data'][number];

interface Props {
  session: SessionInfo;
  sites: readonly Choice[];
}

/** Every watch as its sentence, with what it has raised and what can be done with it. */
export function WatchTable({ session, sites }: Props) {
  const list = useInfiniteQuery(watchListQuery);
  const [changed, setChanged] = useState<WatchRow | null>(null);
  const isNarrow = useMedia('(max-width: 767px)');
  if (list.isPending) return <LoadingRows of="watches" rows={6} />;
  if (list.isError && !list.data) {
    return (
      <ErrorNotice
        what="The watches did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  const rows = list.data.pages.flatMap(({ data }) => data.map((row) => ({ row })));
  if (rows.length === 0) {
    return (
      <EmptyNotice says="Nothing is being watched.">
        Say it as a sentence: which cars, what should have happened, how long.
      </EmptyNotice>
    );
  }
  const act = (row: WatchRow) => <Acts watch={row} onChange={() => setChanged(row)} />;
  return (
    <>
      <LedgerTable
        caption="Watches"
        columns={watchColumns(act)}
        rows={rows}
        keyOf={(row) => String(row.id)}
        margin={(row) => <WatchMark watch={row} />}
        narrow={isNarrow ? (row) => <NarrowWatch watch={row} /> : undefined}
        narrowAct={act}
        scroller={null}
        onEndNear={() => {
          if (list.hasNextPage && !list.isFetching) void list.fetchNextPage();
        }}
      />
      {changed ? (
        <ChangeWatch
          watch={changed}
          session={session}
          sites={sites}
          onClose={() => setChanged(null)}
        />
      ) : null}
    </>
  );
}

function watchColumns(act: (row: WatchRow) => React.ReactNode): Column<WatchRow>[] {
  return [
    { id: 'name', heading: 'Watch', width: 230, cell: ({ name }) => name },
    { id: 'says', heading: 'Tells when', cell: sayWatch },
    { id: 'to', heading: 'To', width: 200, cell: sayRecipients },
    {
      id: 'open',
      heading: 'Open alerts',
      width: 92,
      number: true,
      cell: (row) => <Open watch={row} />,
    },
    {
      id: 'act',
      heading: <span className="only-heard">What can be done</span>,
      width: 130,
      cell: act,
    },
  ];
}

const sayRecipients = ({ named, recipients }: WatchRow): string =>
  [...named.people.map(({ name }) => name), ...recipients.addresses].join(', ');

function WatchMark({ watch }: { watch: WatchRow }) {
  return watch.kind === 'quiet' ? (
    <StateMark state="enRoute" quiet={watch.openAlerts > 0} decorative />
  ) : (
    <StateMark state="onHand" pastLimit={watch.openAlerts > 0} decorative />
  );
}

function Open({ watch }: { watch: WatchRow }) {
  if (watch.openAlerts === 0) return 'none';
  return (
    <Link to={paths.alerts({ watch: watch.id })}>
      {watch.openAlerts}
      <span className="only-heard"> of {watch.name}</span>
    </Link>
  );
}

function Acts({ watch, onChange }: { watch: WatchRow; onChange: () => void }) {
  return (
    <span className="flex gap-12">
      {watch.can.update ? (
        <button type="button" className="link" onClick={onChange}>
          Change<span className="only-heard"> {watch.name}</span>
        </button>
      ) : null}
      {watch.can.delete ? <EndWatch watch={watch} /> : null}
    </span>
  );
}

function NarrowWatch({ watch }: { watch: WatchRow }) {
  return (
    <span className="block whitespace-normal">
      <b className="font-medium">{watch.name}</b>
      <span className="block text-ink-soft">{sayWatch(watch)}</span>
      <span className="block text-ink-soft">
        to {sayRecipients(watch)} · open alerts: <Open watch={watch} />
      </span>
    </span>
  );
}
