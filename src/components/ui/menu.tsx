import { useEffect, useId, useRef, useState } from 'react';
import type { MouseEvent, ReactNode } from 'react';

interface Props {
  word: ReactNode;
  /** Read before the word: what the panel chooses. */
  label?: string;
  /** How the opening word looks; default plain. */
  look?: string;
  align?: 'left' | 'right';
  /** Following a link in it closes the panel. */
  children: ReactNode;
}

/** A word that opens a panel below it; Escape, a press elsewhere or leaving it closes the panel. */
export function Menu({ word, label, look = 'bare', align = 'right', children }: Props) {
  const [open, setOpen] = useState(false);
  const id = useId();
  const frame = useRef<HTMLDivElement>(null);
  const opener = useRef<HTMLButtonElement>(null);
  const closeAfterLink = (event: MouseEvent) => {
    if (!(event.target as HTMLElement).closest('a')) return;
    setOpen(false);
    opener.current?.focus();
  };
  useEffect(() => {
    if (!open) return;
    const away = (event: Event) => {
      if (event.target instanceof Node && !frame.current?.contains(event.target)) setOpen(false);
    };
    const escape = (event: KeyboardEvent) => {
      if (event.key !== 'Escape') return;
      // A dialog around it must not take the same key.
      event.preventDefault();
      setOpen(false);
      opener.current?.focus();
    };
    document.addEventListener('pointerdown', away);
    document.addEventListener('focusin', away);
    document.addEventListener('keydown', escape);
    return () => {
      document.removeEventListener('pointerdown', away);
      document.removeEventListener('focusin', away);
      document.removeEventListener('keydown', escape);
    };
  }, [open]);
  return (
    <div ref={frame} className="relative inline-block">
      <button
        ref={opener}
        type="button"
        className={look === 'bare' ? 'flex min-h-32 cursor-pointer items-center gap-6' : look}
        aria-expanded={open}
        aria-controls={id}
        onClick={() => setOpen(!open)}
      >
        {label ? <span className="only-heard">{label}: </span> : null}
        {word}
      </button>
      <div
        id={id}
        hidden={!open}
        className={`panel ${align === 'right' ? 'right-0' : 'left-0'}`}
        onClick={closeAfterLink}
      >
        {children}
      </div>
    </div>
  );
}
