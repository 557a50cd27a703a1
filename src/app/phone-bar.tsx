import { NavLink } from 'react-router-dom';
import { sectionsOf } from './sections';
import { paths } from '../lib/paths';
import type { SessionInfo } from '../lib/wire';

/** As many stand beside each other in the usual letters. */
const USUAL = 4;

/** The sections at the bottom of a phone, within the thumb's reach. */
export function PhoneBar({ session }: { session: SessionInfo }) {
  const all = [...sectionsOf(session), { word: 'Watches', to: paths.watches }];
  return (
    <nav
      aria-label="Sections"
      className={`sticky bottom-0 z-[1050] flex border-t border-rule-strong bg-paper md:hidden print:hidden ${
        all.length > USUAL ? 'font-condensed text-table' : ''
      }`}
    >
      {all.map(({ word, to }) => (
        <NavLink
          key={word}
          to={to}
          className={({ isActive }) =>
            `bare flex min-h-48 flex-1 items-center justify-center border-t-2 text-center ${
              isActive ? 'border-plate font-semibold' : 'border-transparent text-ink-soft'
            }`
          }
        >
          {word}
        </NavLink>
      ))}
    </nav>
  );
}
