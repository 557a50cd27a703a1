import type { Ref, SelectHTMLAttributes } from 'react';
import { Labelled, type LabelledProps } from './labelled';
import { Options } from './options';
import type { Choice } from './options';

interface Props extends LabelledProps, Omit<SelectHTMLAttributes<HTMLSelectElement>, 'id'> {
  choices: readonly Choice[];
  ref?: Ref<HTMLSelectElement>;
}

/** A labelled list of choices with its hint above the fault, both read out with it. */
export function SelectField({ label, choices, hint, fault, ref, ...select }: Props) {
  return (
    <Labelled label={label} hint={hint} fault={fault}>
      {(control) => (
        <select {...select} ref={ref} {...control}>
          <Options choices={choices} />
        </select>
      )}
    </Labelled>
  );
}
