import { Link } from 'react-router-dom';
import type { Column, LedgerProps } from './ledger-table';

interface Props<Row> {
  index: number;
  entry: { row: Row; gone?: boolean };
  table: LedgerProps<Row>;
  isCurrent: boolean;
  measure: (element: HTMLTableRowElement | null) => void;
}

/** One line of the ledger; its first fact is the link that the arrow keys move along. */
export function LedgerRow<Row>({ index, entry, table, isCurrent, measure }: Props<Row>) {
  const { row, gone } = entry;
  return (
    <tr
      ref={measure}
      data-index={index}
      aria-rowindex={index + 2}
      className={index % 5 === 4 ? 'fifth' : undefined}
      data-gone={gone || undefined}
      data-marked={table.isMarked?.(row) || undefined}
    >
      <td className="margin">{table.margin(row)}</td>
      {table.narrow ? (
        <td className="wraps">
          <RowLink to={table.linkOf?.(row)} isCurrent={isCurrent} block>
            {table.narrow(row)}
          </RowLink>
          {table.narrowAct ? <div className="acts">{table.narrowAct(row)}</div> : null}
        </td>
      ) : (
        table.columns.map((column, place) => (
          <td
            key={column.id}
            className={column.number ? 'number' : column.wraps ? 'wraps' : undefined}
          >
            {place === 0 ? (
              <RowLink to={table.linkOf?.(row)} isCurrent={isCurrent}>
                {column.cell(row)}
              </RowLink>
            ) : (
              cellOf(column, row)
            )}
          </td>
        ))
      )}
    </tr>
  );
}

const cellOf = <Row,>(column: Column<Row>, row: Row) => column.cell(row);

interface LinkProps {
  to: string | undefined;
  isCurrent: boolean;
  block?: boolean;
  children: React.ReactNode;
}

function RowLink({ to, isCurrent, block, children }: LinkProps) {
  if (!to) return children;
  return (
    <Link
      to={to}
      data-row-link
      tabIndex={isCurrent ? 0 : -1}
      className={`bare ${block ? 'block' : ''}`}
    >
      {children}
    </Link>
  );
}
