import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';

/** The answer a screen opens with. `under` is the soft line below it. */
export function Sentence({ children, under }: { children: ReactNode; under?: ReactNode }) {
  return (
    <div className="inset pt-20">
      <h1 className="max-w-[1060px] text-sentence-narrow font-normal tracking-[-.008em] text-pretty sm:text-sentence">
        {children}
      </h1>
      {under ? <p className="mt-6 text-ink-soft">{under}</p> : null}
    </div>
  );
}

/** A number with its noun inside the sentence, leading to what it counts. */
export function Counted({ to, children }: { to: string; children: ReactNode }) {
  return (
    <Link
      to={to}
      className="font-medium decoration-2 underline-offset-[6px] hover:bg-wash-verdigris"
      preventScrollReset
    >
      {children}
    </Link>
  );
}
