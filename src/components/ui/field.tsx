import type { InputHTMLAttributes, Ref } from 'react';
import { Labelled, type LabelledProps } from './labelled';

interface Props extends LabelledProps, Omit<InputHTMLAttributes<HTMLInputElement>, 'id'> {
  ref?: Ref<HTMLInputElement>;
}

/** A labelled input with its hint above the fault, both read out with it. */
export function Field({ label, hint, fault, ref, ...input }: Props) {
  return (
    <Labelled label={label} hint={hint} fault={fault}>
      {(control) => <input {...input} ref={ref} {...control} />}
    </Labelled>
  );
}
