import { useEffect, useLayoutEffect, useState } from 'react';
import type { RefObject } from 'react';
import { useVirtualizer, useWindowVirtualizer } from '@tanstack/react-virtual';

/** Lists up to this length are drawn whole, so that find-in-page and print see them. */
const drawnWhole = 60;
const nearTheEnd = 15;
const headHeight = 30;

/** Which rows to draw, and the heights of what is left out above and below, in pixels. */
export interface LedgerWindow {
  indexes: number[];
  above: number;
  below: number;
  /** Scrolls the row into view. */
  reach: (index: number) => void;
  measure: (element: HTMLTableRowElement | null) => void;
}

/** The part of a long table that is in view of `scroller`, or of the page when that is null. */
export function useLedgerWindow(
  count: number,
  scroller: HTMLElement | null,
  body: RefObject<HTMLTableSectionElement | null>,
  onEndNear?: () => void,
): LedgerWindow {
  const top = useDistanceFromTop(body, scroller === null);
  const common = { count, estimateSize: rowHeight, overscan: 12 };
  const within = useVirtualizer<HTMLElement, HTMLTableRowElement>({
    ...common,
    enabled: scroller !== null,
    scrollMargin: headHeight,
    scrollPaddingStart: headHeight,
    getScrollElement: () => scroller,
  });
  const ofPage = useWindowVirtualizer<HTMLTableRowElement>({
    ...common,
    enabled: scroller === null,
    scrollMargin: top,
  });
  const used = scroller ? within : ofPage;
  const end = used.range?.endIndex ?? 0;
  useEffect(() => {
    if (count > 0 && end >= count - nearTheEnd) onEndNear?.();
  }, [end, count, onEndNear]);
  const reach = (index: number) => used.scrollToIndex(index, { align: 'auto' });
  if (count <= drawnWhole) {
    const indexes = Array.from({ length: count }, (_, index) => index);
    return { indexes, above: 0, below: 0, reach, measure: used.measureElement };
  }
  const items = used.getVirtualItems();
  const margin = scroller ? headHeight : top;
  return {
    indexes: items.map(({ index }) => index),
    above: (items[0]?.start ?? margin) - margin,
    below: used.getTotalSize() - ((items.at(-1)?.end ?? margin) - margin),
    reach,
    measure: used.measureElement,
  };
}

/** The row height that the style sheet gives this device, for rows not drawn yet. */
function rowHeight(): number {
  const written = getComputedStyle(document.documentElement).getPropertyValue('--row');
  return Number.parseFloat(written) || 32;
}

function useDistanceFromTop(body: RefObject<HTMLElement | null>, isWanted: boolean): number {
  const [top, setTop] = useState(0);
  useLayoutEffect(() => {
    if (!isWanted) return;
    const look = () => {
      const box = body.current?.getBoundingClientRect();
      if (box) setTop(Math.round(box.top + window.scrollY));
    };
    look();
    const observer = new ResizeObserver(look);
    observer.observe(document.body);
    return () => observer.disconnect();
  }, [body, isWanted]);
  return top;
}
