import { Link } from 'react-router-dom';
import { Menu } from '../../../components/ui/menu';
import type { Choice } from '../../../components/ui/options';
import { paths } from '../../../lib/paths';
import type { FleetFilter } from '../../../lib/paths';
import { capital, kindNames, sayKind } from '../../../lib/words';
import { SearchWord } from './search-word';

type Filter = Partial<FleetFilter>;

interface Props {
  filter: Filter;
  /** Sites that can be chosen: value is the code. */
  sites: readonly Choice[];
  onSearch: (text: string) => void;
}

const stateChoices: (Choice & { change: Filter })[] = [
  { value: '', label: 'all', change: {} },
  { value: 'enRoute', label: 'moving', change: { state: 'enRoute' } },
  { value: 'onHand', label: 'on hand', change: { state: 'onHand' } },
  { value: 'unseen', label: 'never read', change: { state: 'unseen' } },
  { value: 'quiet', label: 'quiet', change: { quiet: 'true' } },
  { value: 'pastLimit', label: 'past their limit', change: { pastLimit: 'true' } },
];

const sortChoices: Choice[] = [
  { value: 'attention', label: 'what wants attention first' },
  { value: '-lastSeen', label: 'latest read first' },
  { value: 'lastSeen', label: 'longest unread first' },
  { value: 'dwell', label: 'longest standing first' },
  { value: 'unit', label: 'by mark and number' },
];

/** The filter as a line of words; each word opens its choices, and every choice is an address. */
export function FilterWords({ filter, sites, onSearch }: Props) {
  const states = stateChoices.map(({ value, label, change }) => ({
    value,
    label,
    to: paths.fleet({ ...without(filter, 'state', 'quiet', 'pastLimit'), ...change }),
  }));
  const isNarrowed = Object.keys(without(filter, 'sort')).length > 0;
  return (
    <div className="flex flex-wrap items-baseline gap-x-6 gap-y-8 font-condensed text-table">
      <Word label="State" choices={states} value={stateOf(filter)} />
      <Word
        label="Kind"
        choices={simple(filter, 'kind', kindChoices)}
        value={filter.kind}
        end=","
      />
      <Word
        label="Place"
        choices={simple(filter, 'site', [{ value: '', label: 'any place' }, ...sites])}
        value={filter.site}
        end=","
      />
      {filter.owner ? (
        <Word
          label="Owner"
          choices={simple(filter, 'owner', [
            { value: '', label: 'any owner' },
            { value: filter.owner, label: `owned by ${filter.owner}` },
          ])}
          value={filter.owner}
          end=","
        />
      ) : null}
      <Word
        label="Order"
        choices={simple(filter, 'sort', sortChoices)}
        value={filter.sort}
        end=","
      />
      <SearchWord key={filter.search ?? ''} text={filter.search ?? ''} onSearch={onSearch} />
      {isNarrowed ? (
        <Link className="ml-6" to={paths.fleet(filter.sort ? { sort: filter.sort } : {})}>
          drop all
        </Link>
      ) : null}
    </div>
  );
}

const kindChoices: Choice[] = [
  { value: '', label: 'cars and boxes' },
  ...kindNames.map((kind) => ({ value: kind, label: sayKind(kind, 2) })),
];

/** The state word that a filter stands for. */
const stateOf = ({ state, quiet, pastLimit }: Filter): string =>
  quiet ? 'quiet' : pastLimit ? 'pastLimit' : (state ?? '');

function without(filter: Filter, ...names: (keyof FleetFilter)[]): Filter {
  return Object.fromEntries(
    Object.entries(filter).filter(([name]) => !names.includes(name as keyof FleetFilter)),
  );
}

const simple = (filter: Filter, name: keyof FleetFilter, choices: readonly Choice[]) =>
  choices.map((choice) => ({
    ...choice,
    to: paths.fleet({ ...without(filter, name), ...(choice.value && { [name]: choice.value }) }),
  }));

interface WordProps {
  label: string;
  choices: (Choice & { to: string })[];
  value: string | undefined;
  end?: string;
}

function Word({ label, choices, value, end }: WordProps) {
  const current = choices.find((choice) => choice.value === value) ?? choices[0];
  const shown = current?.label ?? '';
  return (
    <span className="whitespace-nowrap">
      <Menu
        label={label}
        align="left"
        look="link"
        word={label === 'State' ? capital(shown) : shown}
      >
        <ul aria-label={label}>
          {choices.map((choice) => (
            <li key={choice.value}>
              <Link to={choice.to} aria-current={choice === current} preventScrollReset>
                {choice.label}
              </Link>
            </li>
          ))}
        </ul>
      </Menu>
      {end}
    </span>
  );
}
