import { useLayoutEffect, useRef, useState } from 'react';
import type { ClipboardEvent, FocusEvent, KeyboardEvent, RefObject } from 'react';

const page = 10;

const moves: Record<string, (at: number, last: number) => number> = {
  ArrowDown: (at) => at + 1,
  ArrowUp: (at) => at - 1,
  PageDown: (at) => at + page,
  PageUp: (at) => at - page,
  Home: () => 0,
  End: (_, last) => last,
};

/**
 * One stop for the tab key in a table of any length: arrows, page, home and end move along the
 * rows' links. Copying with nothing marked takes the row in hand, its cells parted by tabs.
 */
export function useLedgerKeys(
  body: RefObject<HTMLTableSectionElement | null>,
  count: number,
  reach: (index: number) => void,
) {
  const [wanted, setWanted] = useState(0);
  const current = Math.min(wanted, Math.max(0, count - 1));
  const pending = useRef<number | null>(null);
  useLayoutEffect(() => {
    if (pending.current === null) return;
    const link = body.current?.querySelector<HTMLElement>(
      `tr[data-index="${pending.current}"] [data-row-link]`,
    );
    if (!link) return;
    pending.current = null;
    link.focus();
  });
  return {
    current,
    onKeyDown: (event: KeyboardEvent) => {
      const move = moves[event.key];
      if (!move || !(event.target as HTMLElement).matches('[data-row-link]')) return;
      event.preventDefault();
      const next = Math.max(0, Math.min(count - 1, move(current, count - 1)));
      pending.current = next;
      reach(next);
      setWanted(next);
    },
    onFocus: (event: FocusEvent) => {
      const row = (event.target as HTMLElement).closest('tr');
      if (row?.dataset.index && pending.current === null) setWanted(Number(row.dataset.index));
    },
    onCopy: (event: ClipboardEvent) => {
      const row = (event.target as HTMLElement).closest?.('tr');
      if (!row || !document.getSelection()?.isCollapsed) return;
      const cells = [...row.querySelectorAll('td:not(.margin)')];
      event.clipboardData.setData('text/plain', cells.map((cell) => cell.textContent).join('\t'));
      event.preventDefault();
    },
  };
}
