import { useId, useState } from 'react';

interface Props {
  text: string;
  onSearch: (text: string) => void;
}

/** The blank "with number or mark …" at the end of the filter line; Enter or leaving it searches. */
export function SearchWord({ text, onSearch }: Props) {
  const id = useId();
  const [typed, setTyped] = useState(text);
  const search = () => {
    if (typed.trim() !== text) onSearch(typed.trim());
  };
  return (
    <form
      role="search"
      className="flex items-baseline gap-6 whitespace-nowrap"
      onSubmit={(event) => {
        event.preventDefault();
        search();
      }}
    >
      <label htmlFor={id}>with</label>
      <input
        id={id}
        className="blank w-[112px]"
        placeholder="mark or number"
        aria-label="With mark or number"
        value={typed}
        onChange={(event) => setTyped(event.target.value)}
        onBlur={search}
      />
    </form>
  );
}
