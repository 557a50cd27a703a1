export interface Choice {
  value: string;
  label: string;
}

/** The choices of a list, for selects that stand inside a sentence. */
export function Options({ choices }: { choices: readonly Choice[] }) {
  return choices.map(({ value, label }) => (
    <option key={value} value={value}>
      {label}
    </option>
  ));
}
