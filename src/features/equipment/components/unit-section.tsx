import type { ReactNode } from 'react';

interface Props {
  id: string;
  heading: string;
  aside?: ReactNode;
  children: ReactNode;
}

/** One chapter of the unit page; the contents in the margin lead to its heading. */
export function UnitSection({ id, heading, aside, children }: Props) {
  return (
    <section aria-labelledby={id} className="border-t border-ink pb-32 pt-8">
      <div className="flex flex-wrap items-baseline justify-between gap-x-20 pb-8">
        <h2 id={id} className="scroll-mt-[68px] text-lead">
          {heading}
        </h2>
        <div className="font-condensed text-table text-ink-soft">{aside}</div>
      </div>
      {children}
    </section>
  );
}
