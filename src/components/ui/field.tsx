import { useId } from 'react';
import type { InputHTMLAttributes, ReactNode, Ref } from 'react';

interface Props extends Omit<InputHTMLAttributes<HTMLInputElement>, 'id'> {
  label: ReactNode;
  hint?: ReactNode;
  /** What is wrong with it, in words; null when nothing is. */
  fault?: string | null;
  ref?: Ref<HTMLInputElement>;
}

/** A labelled input with its hint above the fault, both read out with it. */
export function Field({ label, hint, fault, ref, ...input }: Props) {
  const id = useId();
  const described = [hint ? `${id}-hint` : '', fault ? `${id}-fault` : ''].filter(Boolean);
  return (
    <div className="flex flex-col gap-4">
      <label htmlFor={id} className="text-table font-medium">
        {label}
      </label>
      <input
        {...input}
        ref={ref}
        id={id}
        className="field"
        aria-invalid={fault ? true : undefined}
        aria-describedby={described.join(' ') || undefined}
      />
      {hint ? (
        <p id={`${id}-hint`} className="text-note text-ink-soft">
          {hint}
        </p>
      ) : null}
      <Fault id={`${id}-fault`} text={fault} />
    </div>
  );
}

/** The words under a control that is wrong. */
export function Fault({ id, text }: { id?: string; text: string | null | undefined }) {
  if (!text) return null;
  return (
    <p id={id} className="text-note font-medium text-oxide">
      {text}
    </p>
  );
}
