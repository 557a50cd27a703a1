import { useRef } from 'react';
import type { KeyboardEvent, PointerEvent } from 'react';

/** The wordmark: the plate over two rail ends, and the name; `isShort` leaves the name out on phones. */
export function Wordmark({ isShort = false }: { isShort?: boolean }) {
  return (
    <span className="flex items-center gap-12 text-lead font-semibold tracking-[.01em]">
      <svg width="40" height="14" viewBox="0 0 40 14" aria-hidden="true" className="fill-current">
        <path d="M0 4.5h7v5H0zM33 4.5h7v5h-7z" />
        <path
          fillRule="evenodd"
          d="M6 .5h28v13H6zM14 4.2a2.8 2.8 0 1 0 0 5.6 2.8 2.8 0 0 0 0-5.6zM26 4.2a2.8 2.8 0 1 0 0 5.6 2.8 2.8 0 0 0 0-5.6z"
        />
      </svg>
      <span className={isShort ? 'max-sm:hidden' : undefined}>Fishplate</span>
    </span>
  );
}

interface DividerProps {
  /** What stands on its left, for the reader of the screen. */
  label: string;
  /** Share of the left part in per cent. */
  share: number;
  onMove: (share: number) => void;
}

const narrowest = 25;
const widest = 75;
const clamp = (share: number) => Math.min(widest, Math.max(narrowest, Math.round(share)));

/** The handle between two parts of a page: drag it, or move it by the arrow keys. */
export function Divider({ label, share, onMove }: DividerProps) {
  const dragging = useRef(false);
  const follow = (event: PointerEvent<HTMLDivElement>) => {
    if (!dragging.current) return;
    const frame = event.currentTarget.parentElement?.getBoundingClientRect();
    if (frame) onMove(clamp(((event.clientX - frame.left) / frame.width) * 100));
  };
  const byKey = (event: KeyboardEvent) => {
    const step = { ArrowLeft: -2, ArrowRight: 2, Home: -100, End: 100 }[event.key];
    if (step === undefined) return;
    event.preventDefault();
    onMove(clamp(share + step));
  };
  return (
    <div
      className="divider"
      role="separator"
      tabIndex={0}
      aria-orientation="vertical"
      aria-label={label}
      aria-valuenow={share}
      aria-valuemin={narrowest}
      aria-valuemax={widest}
      onKeyDown={byKey}
      onPointerDown={(event) => {
        dragging.current = true;
        event.currentTarget.setPointerCapture(event.pointerId);
      }}
      onPointerMove={follow}
      onPointerUp={() => {
        dragging.current = false;
      }}
    />
  );
}
