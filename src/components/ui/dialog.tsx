import { useEffect, useId, useRef } from 'react';
import type { ReactNode } from 'react';

interface Props {
  heading: ReactNode;
  onClose: () => void;
  /** False: Escape and the word "Close" are not offered (sign-in over the page). */
  canClose?: boolean;
  children: ReactNode;
}

/**
 * The browser's own modal dialog, open as long as it is drawn. Focus begins at `data-begin`, else at
 * its first control, and goes back where it came from.
 */
export function Dialog({ heading, onClose, canClose = true, children }: Props) {
  const box = useRef<HTMLDialogElement>(null);
  const id = useId();
  useEffect(() => {
    const element = box.current;
    if (!element) return;
    const before = document.activeElement;
    element.showModal();
    element.querySelector<HTMLElement>('[data-begin]')?.focus();
    return () => {
      element.close();
      if (before instanceof HTMLElement && before.isConnected) before.focus();
    };
  }, []);
  return (
    <dialog
      ref={box}
      className="dialog"
      aria-labelledby={id}
      onCancel={(event) => {
        event.preventDefault();
        if (canClose) onClose();
      }}
    >
      <div className="flex items-baseline justify-between gap-20 border-b border-rule-strong px-24 py-12">
        <h2 id={id} className="text-lead">
          {heading}
        </h2>
        {canClose ? (
          <button type="button" className="link text-table" onClick={onClose}>
            Close
          </button>
        ) : null}
      </div>
      <div className="px-24 py-20">{children}</div>
    </dialog>
  );
}
