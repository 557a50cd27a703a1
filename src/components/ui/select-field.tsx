import { useId } from 'react';
import type { ReactNode, Ref, SelectHTMLAttributes } from 'react';
import { Fault } from './field';
import { Options } from './options';
import type { Choice } from './options';

interface Props extends Omit<SelectHTMLAttributes<HTMLSelectElement>, 'id'> {
  label: ReactNode;
  choices: readonly Choice[];
  hint?: ReactNode;
  /** What is wrong with it, in words; null when nothing is. */
  fault?: string | null;
  ref?: Ref<HTMLSelectElement>;
}

/** A labelled list of choices with its hint above the fault, both read out with it. */
export function SelectField({ label, choices, hint, fault, ref, ...select }: Props) {
  const id = useId();
  const described = [hint ? `${id}-hint` : '', fault ? `${id}-fault` : ''].filter(Boolean);
  return (
    <div className="flex flex-col gap-4">
      <label htmlFor={id} className="text-table font-medium">
        {label}
      </label>
      <select
        {...select}
        ref={ref}
        id={id}
        className="field"
        aria-invalid={fault ? true : undefined}
        aria-describedby={described.join(' ') || undefined}
      >
        <Options choices={choices} />
      </select>
      {hint ? (
        <p id={`${id}-hint`} className="text-note text-ink-soft">
          {hint}
        </p>
      ) : null}
      <Fault id={`${id}-fault`} text={fault} />
    </div>
  );
}
