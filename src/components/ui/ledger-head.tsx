import type { Column, LedgerProps } from './ledger-table';

interface Props<Row> {
  columns: Column<Row>[];
  sort: LedgerProps<Row>['sort'];
  isNarrow: boolean;
}

/** The headings; one that can sort is a button, and pressing it again turns the order round. */
export function LedgerHead<Row>({ columns, sort, isNarrow }: Props<Row>) {
  if (isNarrow) {
    return (
      <thead className="only-heard">
        <tr>
          <th scope="col">Mark</th>
          <th scope="col">{columns.map(({ heading }) => heading).filter(Boolean)[0]}</th>
        </tr>
      </thead>
    );
  }
  return (
    <thead>
      <tr>
        <th scope="col" className="margin">
          <span className="only-heard">State</span>
        </th>
        {columns.map((column) => (
          <th
            key={column.id}
            scope="col"
            className={column.number ? 'number' : undefined}
            aria-sort={sortedBy(column.sort, sort?.value)}
          >
            {column.sort && sort ? (
              <button
                type="button"
                className="sorts"
                onClick={() => sort.onSort(nextSort(column.sort, sort.value))}
              >
                {column.heading}
              </button>
            ) : (
              column.heading
            )}
          </th>
        ))}
      </tr>
    </thead>
  );
}

function sortedBy(words: Column<unknown>['sort'], value: string | undefined) {
  if (!words || value === undefined) return undefined;
  if (value === words.up) return 'ascending';
  if (value === words.down) return 'descending';
  return undefined;
}

function nextSort(words: Column<unknown>['sort'], value: string): string {
  const first = words?.down ?? words?.up ?? value;
  return value === first ? (words?.up ?? first) : first;
}
