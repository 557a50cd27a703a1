import type { ButtonHTMLAttributes, ReactNode } from 'react';

interface Props extends ButtonHTMLAttributes<HTMLButtonElement> {
  kind?: 'main' | 'plain';
  /** Why it cannot be pressed now; the button stays reachable and says so. */
  refusal?: string | null;
  busy?: boolean;
  children: ReactNode;
}

/** A button; the one main act of a screen is `kind="main"`. `busy` and `refusal` swallow the press. */
export function Button({ kind = 'plain', refusal, busy, children, onClick, ...rest }: Props) {
  const stopped = Boolean(refusal) || Boolean(busy);
  return (
    <button
      type="button"
      {...rest}
      className="button"
      data-kind={kind}
      aria-disabled={stopped || undefined}
      title={refusal ?? rest.title}
      onClick={(event) => {
        if (stopped) event.preventDefault();
        else onClick?.(event);
      }}
    >
      {children}
      {refusal ? <span className="only-heard">{refusal}</span> : null}
    </button>
  );
}
