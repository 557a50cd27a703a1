import { NavLink } from 'react-router-dom';
import { AsOf } from '../components/ui/as-of';
import { paths } from '../lib/paths';
import type { SessionInfo } from '../lib/wire';

const known: Record<string, { word: string; to: string }> = {
  fleet: { word: 'Fleet', to: paths.fleet() },
  alerts: { word: 'Alerts', to: paths.alerts() },
  rework: { word: 'Rework', to: paths.rework },
  setAside: { word: 'Set aside', to: paths.setAside() },
  doubts: { word: 'Doubts', to: paths.doubts },
};

/** The sections that the server says this person may open, in the server's order. */
export const sectionsOf = (session: SessionInfo) =>
  session.sections.flatMap((name) => (known[name] ? [known[name]] : []));

/** The row of sections; the current one stands on its plate. */
export function Sections({ session }: { session: SessionInfo }) {
  return (
    <div className="sections flex-none print:hidden">
      <nav aria-label="Sections" className="hidden gap-32 md:flex">
        {sectionsOf(session).map(({ word, to }) => (
          <NavLink key={word} to={to}>
            {word}
          </NavLink>
        ))}
      </nav>
      <AsOf zone={session.user.timeZone} />
    </div>
  );
}
