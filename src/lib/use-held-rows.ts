import { useCallback, useEffect, useMemo, useRef, useState } from 'react';

/** A row as drawn; `gone` means it has left the list and stays, struck, until the person lets go. */
export interface HeldRow<Row> {
  row: Row;
  gone: boolean;
}

export interface HeldRows<Row> {
  rows: HeldRow<Row>[];
  /** How many rows would appear, vanish or move if the list were drawn anew. */
  changed: number;
  /** Draws the list as it is now. */
  show: () => void;
  /** Keeps the order from now on, for this reason. */
  hold: (why: string) => void;
  /** Ends one reason; with the last one gone the list follows again. */
  release: (why: string) => void;
}

/**
 * Live rows that do not move under pointer, focus or scroll: while held, each row's facts are
 * renewed in place and only their order waits. `keyOf` must be stable; `show`, `hold` and `release` are.
 */
export function useHeldRows<Row>(fresh: Row[], keyOf: (row: Row) => string): HeldRows<Row> {
  const [held, setHeld] = useState<Row[] | null>(null);
  const reasons = useRef(new Set<string>());
  const latest = useRef(fresh);
  useEffect(() => {
    latest.current = fresh;
  }, [fresh]);
  const view = useMemo(() => arrange(fresh, held, keyOf), [fresh, held, keyOf]);
  const show = useCallback(() => setHeld(reasons.current.size > 0 ? latest.current : null), []);
  const hold = useCallback((why: string) => {
    if (reasons.current.size === 0) setHeld(latest.current);
    reasons.current.add(why);
  }, []);
  const release = useCallback((why: string) => {
    reasons.current.delete(why);
    if (reasons.current.size === 0) setHeld(null);
  }, []);
  return { ...view, show, hold, release };
}

/** Pure part of `useHeldRows`: the rows to draw and how many have changed place. */
export function arrange<Row>(
  fresh: Row[],
  held: Row[] | null,
  keyOf: (row: Row) => string,
): Pick<HeldRows<Row>, 'rows' | 'changed'> {
  if (!held) return { rows: fresh.map((row) => ({ row, gone: false })), changed: 0 };
  const now = new Map(fresh.map((row, index) => [keyOf(row), { row, index }]));
  const before = new Set(held.map(keyOf));
  const rows = held.map((row) => {
    const found = now.get(keyOf(row));
    return { row: found?.row ?? row, gone: !found };
  });
  const places = held.flatMap((row) => now.get(keyOf(row))?.index ?? []);
  const last = places.length > 0 ? Math.max(...places) : -1;
  // Rows past everything held are the next page, not a change.
  const further = fresh.slice(last + 1).filter((row) => !before.has(keyOf(row)));
  const inserted = fresh.slice(0, last + 1).filter((row) => !before.has(keyOf(row))).length;
  const gone = held.length - places.length;
  const moved = places.length - longestRising(places);
  return {
    rows: [...rows, ...further.map((row) => ({ row, gone: false }))],
    changed: inserted + gone + moved,
  };
}

/** Length of the longest increasing subsequence (Schensted 1961). */
function longestRising(values: number[]): number {
  const tails: number[] = [];
  for (const value of values) {
    let low = 0;
    let high = tails.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if ((tails[middle] ?? Infinity) < value) low = middle + 1;
      else high = middle;
    }
    tails[low] = value;
  }
  return tails.length;
}
