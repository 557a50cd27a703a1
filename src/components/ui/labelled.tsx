import { useId } from 'react';
import type { ReactNode } from 'react';
import { Fault } from './fault';

export interface LabelledProps {
  label: ReactNode;
  hint?: ReactNode;
  /** What is wrong with it, in words; null when nothing is. */
  fault?: string | null;
}

/** What ties a control to its label, hint and fault. */
export interface ControlProps {
  id: string;
  className: string;
  'aria-invalid': true | undefined;
  'aria-describedby': string | undefined;
}

/** A label, the control that `children` makes of its ties, and its hint above the fault. */
export function Labelled({
  label,
  hint,
  fault,
  children,
}: LabelledProps & { children: (control: ControlProps) => ReactNode }) {
  const id = useId();
  const described = [hint ? `${id}-hint` : '', fault ? `${id}-fault` : ''].filter(Boolean);
  return (
    <div className="flex flex-col gap-4">
      <label htmlFor={id} className="text-table font-medium">
        {label}
      </label>
      {children({
        id,
        className: 'field',
        'aria-invalid': fault ? true : undefined,
        'aria-describedby': described.join(' ') || undefined,
      })}
      {hint ? (
        <p id={`${id}-hint`} className="text-note text-ink-soft">
          {hint}
        </p>
      ) : null}
      <Fault id={`${id}-fault`} text={fault} />
    </div>
  );
}
