import { useId, useState } from 'react';
import type { ReactNode } from 'react';

/** A word with a dotted line; pressing it opens its explanation in place. */
export function Explained({ children, means }: { children: ReactNode; means: ReactNode }) {
  const [open, setOpen] = useState(false);
  const id = useId();
  return (
    <>
      <button
        type="button"
        className="link explained"
        aria-expanded={open}
        aria-controls={id}
        onClick={() => setOpen(!open)}
      >
        {children}
      </button>
      <span id={id} hidden={!open} className="text-ink-soft">
        {' '}
        ({means})
      </span>
    </>
  );
}
