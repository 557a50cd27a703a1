import { Link } from 'react-router-dom';
import { paths } from '../../../lib/paths';
import type { DemoCaseView } from '../../../lib/wire';

const screens = {
  setAside: { word: 'Set aside', to: paths.setAside() },
  doubts: { word: 'Doubts', to: paths.doubts },
};

/** Every case in a line or two, and beside it what shows it. */
export function CaseList({ cases, sections }: { cases: DemoCaseView[]; sections: string[] }) {
  return (
    <ol className="border-t border-rule-strong">
      {cases.map((each) => (
        <li
          key={each.id}
          id={each.id}
          className="grid gap-x-32 gap-y-4 border-b border-rule py-12 md:grid-cols-[minmax(0,44rem)_15rem]"
        >
          <div>
            <h2 className="font-medium">{each.title}</h2>
            <p className="text-ink-soft">{each.says}</p>
          </div>
          <Where each={each} mayOpen={each.screen !== null && sections.includes(each.screen)} />
        </li>
      ))}
    </ol>
  );
}

function Where({ each, mayOpen }: { each: DemoCaseView; mayOpen: boolean }) {
  const { cars, site, screen } = each;
  return (
    <ul className="text-table" aria-label={`Where to see: ${each.title}`}>
      {cars.map(({ unitId, display, opens }) => (
        <li key={unitId} className="mono py-4">
          {opens ? <Link to={paths.equipment(unitId)}>{display}</Link> : display}
        </li>
      ))}
      {site ? <li className="py-4">{site.name}</li> : null}
      {screen ? (
        <li className="py-4">
          {mayOpen ? <Link to={screens[screen].to}>{screens[screen].word}</Link> : null}
          {mayOpen ? null : `${screens[screen].word} (not among your sections)`}
        </li>
      ) : null}
    </ul>
  );
}
