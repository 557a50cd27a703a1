import { useId } from 'react';
import type { Choice } from './options';

interface Props<Value extends string> {
  label: string;
  value: Value;
  choices: readonly (Choice & { value: Value })[];
  onChoose: (value: Value) => void;
}

/** A choice of one among a few words on one line. */
export function ChoiceRow<Value extends string>({ label, value, choices, onChoose }: Props<Value>) {
  const name = useId();
  return (
    <fieldset className="border-b border-rule py-8">
      <legend className="float-left w-[84px] text-table text-ink-soft">{label}</legend>
      <div className="flex flex-wrap gap-x-16 gap-y-4">
        {choices.map((choice) => (
          <label key={choice.value} className="flex min-h-24 items-center gap-6 text-table">
            <input
              type="radio"
              name={name}
              className="accent-verdigris"
              checked={choice.value === value}
              onChange={() => onChoose(choice.value)}
            />
            {choice.label}
          </label>
        ))}
      </div>
    </fieldset>
  );
}
