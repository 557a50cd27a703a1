import { useId } from 'react';
import type { ReactNode, Ref, SelectHTMLAttributes } from 'react';

export interface Choice {
  value: string;
  label: string;
}

interface Props extends Omit<SelectHTMLAttributes<HTMLSelectElement>, 'id' | 'children'> {
  label: ReactNode;
  choices: readonly Choice[];
  ref?: Ref<HTMLSelectElement>;
}

/** A labelled choice of one, by the browser's own list. */
export function Select({ label, choices, ref, ...select }: Props) {
  const id = useId();
  return (
    <div className="flex flex-col gap-4">
      <label htmlFor={id} className="text-table font-medium">
        {label}
      </label>
      <select {...select} ref={ref} id={id} className="field">
        <Options choices={choices} />
      </select>
    </div>
  );
}

/** The choices of a list, for selects that stand inside a sentence. */
export function Options({ choices }: { choices: readonly Choice[] }) {
  return choices.map(({ value, label }) => (
    <option key={value} value={value}>
      {label}
    </option>
  ));
}
