import { useRef } from 'react';
import type { ReactNode } from 'react';
import { LedgerHead } from './ledger-head';
import { LedgerRow } from './ledger-row';
import { useLedgerKeys } from './use-ledger-keys';
import { useLedgerWindow } from './use-ledger-window';

export interface Column<Row> {
  id: string;
  heading: ReactNode;
  /** Absent: takes its share of what the others leave. */
  width?: number;
  number?: boolean;
  /** Long words go on a second line instead of being cut. */
  wraps?: boolean;
  /** The sort words of the list that this heading asks for. */
  sort?: { up?: string; down?: string };
  cell: (row: Row) => ReactNode;
}

export interface LedgerProps<Row> {
  /** Read out as the table's name; not drawn. */
  caption: string;
  columns: Column<Row>[];
  rows: { row: Row; gone?: boolean }[];
  keyOf: (row: Row) => string;
  /** What the system says, left of the double rule. */
  margin: (row: Row) => ReactNode;
  /** Where the first column leads; rows without it are not reachable one by one. */
  linkOf?: (row: Row) => string;
  isMarked?: (row: Row) => boolean;
  sort?: { value: string; onSort: (value: string) => void };
  /** One cell for all facts, where the columns do not fit. */
  narrow?: ((row: Row) => ReactNode) | undefined;
  /** What can be done with the row there, outside its link. */
  narrowAct?: (row: Row) => ReactNode;
  /** Called when the last rows come into view. */
  onEndNear?: () => void;
  /** Known length of the whole list, where the rows here are only its head. */
  total?: number;
  /** The element that scrolls; null: the page does. */
  scroller: HTMLElement | null;
}

/** The ledger: a margin for the system's marks, a double rule, then facts only; long lists are virtual. */
export function LedgerTable<Row>(props: LedgerProps<Row>) {
  const { columns, rows, keyOf, narrow } = props;
  const body = useRef<HTMLTableSectionElement>(null);
  const shown = useLedgerWindow(rows.length, props.scroller, body, props.onEndNear);
  const keys = useLedgerKeys(body, rows.length, shown.reach);
  const span = narrow ? 2 : columns.length + 1;
  return (
    <table
      className="ledger"
      data-scrolls={props.scroller ? 'itself' : 'page'}
      aria-rowcount={(props.total ?? rows.length) + 1}
    >
      <caption className="only-heard">{props.caption}</caption>
      <colgroup>
        <col className="w-[49px]" />
        {narrow ? (
          <col />
        ) : (
          columns.map(({ id, width }) => <col key={id} {...(width ? { width } : {})} />)
        )}
      </colgroup>
      <LedgerHead columns={columns} sort={props.sort} isNarrow={Boolean(narrow)} />
      <tbody ref={body} onKeyDown={keys.onKeyDown} onFocus={keys.onFocus} onCopy={keys.onCopy}>
        <Spacer height={shown.above} span={span} />
        {shown.indexes.map((index) => {
          const entry = rows[index];
          if (!entry) return null;
          return (
            <LedgerRow
              key={keyOf(entry.row)}
              index={index}
              entry={entry}
              table={props}
              isCurrent={index === keys.current}
              measure={shown.measure}
            />
          );
        })}
        <Spacer height={shown.below} span={span} />
      </tbody>
    </table>
  );
}

function Spacer({ height, span }: { height: number; span: number }) {
  if (height <= 0) return null;
  return (
    <tr data-spacer aria-hidden="true" style={{ height }}>
      <td colSpan={span} style={{ height }} />
    </tr>
  );
}
