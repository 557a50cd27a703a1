import { useEffect, useMemo } from 'react';
import { useInfiniteQuery } from '@tanstack/react-query';
import { EmptyNotice, ErrorNotice, LoadingRows } from '../../../components/ui/notice';
import { LedgerTable } from '../../../components/ui/ledger-table';
import { Mark } from '../../../components/ui/mark';
import { StateMark } from '../../../components/ui/state-mark';
import { paths } from '../../../lib/paths';
import type { FleetFilter } from '../../../lib/paths';
import { useHeldRows } from '../../../lib/use-held-rows';
import type { HeldRows } from '../../../lib/use-held-rows';
import { useMedia } from '../../../lib/use-media';
import { useNow } from '../../../lib/use-now';
import { formatInstant } from '../../../lib/times';
import type { EquipmentItem } from '../../../lib/wire';
import { equipmentListQuery } from '../api/equipment-list';
import { sayWhere } from '../where';
import { For, fleetColumns } from './fleet-columns';

interface Props {
  filter: Partial<FleetFilter>;
  zone: string;
  /** The element that scrolls; null: the page. */
  scroller: HTMLElement | null;
  onSort: (sort: string) => void;
  /** Shown where the filter leaves nothing. */
  dropFilters: React.ReactNode;
}

/** Pixels from the head of the list that count as reading further down. */
const scrolledAway = 40;

const keyOf = (row: EquipmentItem) => row.unitId;

/** A car that moved between two pages while they were fetched stands in both: its first place counts. */
function eachOnce(rows: EquipmentItem[]): EquipmentItem[] {
  const seen = new Set<string>();
  return rows.filter(({ unitId }) => !seen.has(unitId) && seen.add(unitId));
}

/** The fleet as a ledger: live, its order held while it is being read, further pages as they come into view. */
export function FleetTable({ filter, zone, scroller, onSort, dropFilters }: Props) {
  const list = useInfiniteQuery(equipmentListQuery(filter));
  const fresh = useMemo(
    () => eachOnce(list.data?.pages.flatMap((page) => page.data) ?? []),
    [list.data],
  );
  const held = useHeldRows(fresh, keyOf);
  useHoldWhileScrolled(scroller, held);
  const show = () => {
    // The word that was pressed goes away, and what goes away with the focus on it never loses it.
    held.release('focus');
    held.show();
  };
  const isNarrow = useMedia('(max-width: 559px)');
  const now = useNow();
  if (list.isPending) return <LoadingRows of="the list" rows={20} />;
  if (list.isError && fresh.length === 0) {
    return (
      <ErrorNotice
        what="The list did not come"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    );
  }
  if (held.rows.length === 0) {
    return <EmptyNotice says="Nothing is left under these filters.">{dropFilters}</EmptyNotice>;
  }
  return (
    <div
      onPointerEnter={() => held.hold('pointer')}
      onPointerLeave={() => held.release('pointer')}
      onFocus={() => held.hold('focus')}
      onBlur={() => held.release('focus')}
    >
      <LedgerTable
        caption="Cars and boxes"
        columns={fleetColumns(zone, now)}
        rows={held.rows}
        keyOf={keyOf}
        margin={(row) => <StateMark {...row} />}
        linkOf={(row) => paths.equipment(row.unitId)}
        sort={{ value: filter.sort ?? 'attention', onSort }}
        narrow={isNarrow ? (row) => <NarrowRow row={row} zone={zone} now={now} /> : undefined}
        scroller={scroller}
        onEndNear={() => {
          if (list.hasNextPage && !list.isFetching) void list.fetchNextPage();
        }}
      />
      <ChangedLine changed={held.changed} onShow={show} />
      {list.isFetchingNextPage ? <LoadingRows of="further rows" rows={5} /> : null}
      {list.isError ? (
        <ErrorNotice
          what="The list could not be renewed; what stands here is older"
          error={list.error}
          onRetry={() => void list.refetch()}
        />
      ) : null}
    </div>
  );
}

/** Rows also keep still while the list stands scrolled away from its head. */
function useHoldWhileScrolled(
  scroller: HTMLElement | null,
  { hold, release }: HeldRows<EquipmentItem>,
) {
  useEffect(() => {
    const target = scroller ?? window;
    const look = () => {
      const isAway = (scroller ? scroller.scrollTop : window.scrollY) > scrolledAway;
      (isAway ? hold : release)('scroll');
    };
    target.addEventListener('scroll', look, { passive: true });
    return () => {
      target.removeEventListener('scroll', look);
      release('scroll');
    };
  }, [scroller, hold, release]);
}

function ChangedLine({ changed, onShow }: { changed: number; onShow: () => void }) {
  return (
    <p
      role="status"
      className="sticky bottom-0 z-[2] text-center font-condensed text-table max-md:bottom-52"
    >
      {changed > 0 ? (
        <span className="inline-block border border-rule-strong bg-wash-ochre px-12 py-4">
          {changed} changed,{' '}
          <button type="button" className="link" onClick={onShow}>
            show
          </button>
        </span>
      ) : null}
    </p>
  );
}

function NarrowRow({ row, zone, now }: { row: EquipmentItem; zone: string; now: number }) {
  return (
    <span className="flex justify-between gap-12">
      <span className="min-w-0">
        <Mark>{row.display}</Mark>
        <span className="block truncate">{sayWhere(row)}</span>
      </span>
      <span className="flex-none text-right">
        <For row={row} now={now} />
        <span className="mono block text-small text-ink-soft">
          {row.lastSeen ? formatInstant(row.lastSeen.at, zone, now) : ''}
        </span>
      </span>
    </span>
  );
}
