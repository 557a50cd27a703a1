import { useMemo } from 'react';
import { useInfiniteQuery } from '@tanstack/react-query';
import { LedgerTable } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { StateMark } from '../../../components/ui/state-mark';
import { paths } from '../../../lib/paths';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import type { AlertView } from '../../../lib/wire';
import { alertListQuery } from '../api/alert-list';
import type { AlertFilter } from '../api/alert-list';
import { sayAlert, sayCleared, sayLength } from '../say-alert';
import { alertColumns } from './alert-columns';
import { TakeAlert } from './take-alert';

interface Props {
  filter: AlertFilter;
  zone: string;
  /** What follows from there being none. */
  nothing: { says: string; next: React.ReactNode };
}

/** Alerts as a ledger; further pages come as the last rows do. */
export function AlertTable({ filter, zone, nothing }: Props) {
  const list = useInfiniteQuery(alertListQuery(filter));
  const rows = useMemo(
    () => (list.data?.pages ?? []).flatMap((page) => page.data.map((row) => ({ row }))),
    [list.data],
  );
  const isNarrow = useMedia('(max-width: 767px)');
  const now = useNow();
  if (list.isPending) return <LoadingRows of="alerts" />;
  if (list.isError && rows.length === 0) {
    return (
      <ErrorNotice
        what="The alerts did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  if (rows.length === 0) return <EmptyNotice says={nothing.says}>{nothing.next}</EmptyNotice>;
  return (
    <LedgerTable
      caption="Alerts"
      columns={alertColumns(filter.state, zone, now)}
      rows={rows}
      keyOf={(row) => String(row.id)}
      margin={(row) => <AlertMark alert={row} />}
      linkOf={(row) => paths.equipment(row.unitId)}
      narrow={isNarrow ? (row) => <NarrowAlert alert={row} now={now} /> : undefined}
      narrowAct={(row) => (row.cleared ? null : <TakeAlert alert={row} zone={zone} />)}
      scroller={null}
      onEndNear={() => {
        if (list.hasNextPage && !list.isFetching) void list.fetchNextPage();
      }}
    />
  );
}

function AlertMark({ alert }: { alert: AlertView }) {
  const isOpen = alert.cleared === null;
  return alert.kind === 'quiet' ? (
    <StateMark state="enRoute" quiet={isOpen} />
  ) : (
    <StateMark state="onHand" pastLimit={isOpen} />
  );
}

function NarrowAlert({ alert, now }: { alert: AlertView; now: number }) {
  return (
    <span className="flex justify-between gap-12">
      <span className="min-w-0">
        <Mark>{alert.display}</Mark>
        <span className="block truncate">{sayAlert(alert)}</span>
      </span>
      <span className="flex-none text-right">
        {sayLength(alert, now)}
        <span className="block text-ink-soft">{sayCleared(alert)}</span>
      </span>
    </span>
  );
}
