import { Link } from 'react-router-dom';
import { AlertsToAnswer } from '../features/alerts/components/alerts-to-answer';
import { LookUpField } from '../features/look-up/components/look-up-field';
import { Menu } from '../components/ui/menu';
import { Wordmark } from '../components/ui/plate';
import { paths } from '../lib/paths';
import type { SessionInfo } from '../lib/wire';
import { DeviceSettings } from './device-settings';

interface Props {
  session: SessionInfo;
  onSignOut: () => void;
}

/** Wordmark, look-up, what wants an answer, and who is signed in. */
export function ShellHeader({ session, onSignOut }: Props) {
  return (
    <header className="on-dark inset sticky top-0 z-[1060] flex min-h-48 flex-none items-center gap-x-16 bg-creosote text-on-creosote lg:gap-x-32 print:hidden">
      <Link to={paths.home} className="bare" aria-label="Fishplate, first page">
        <Wordmark isShort />
      </Link>
      <LookUpField />
      <div className="ml-auto flex items-center gap-x-20 text-table lg:gap-x-24">
        {session.sections.includes('alerts') ? (
          <span className="hidden md:inline">
            <AlertsToAnswer />
          </span>
        ) : null}
        <Menu word={<WhoWord session={session} />}>
          <WhoPanel session={session} onSignOut={onSignOut} />
        </Menu>
      </div>
    </header>
  );
}

function WhoWord({ session: { user } }: { session: SessionInfo }) {
  return (
    <>
      <span className="max-w-[12ch] truncate font-medium sm:max-w-none">{user.name}</span>
      <span className="hidden text-on-creosote-soft xl:inline">
        {user.organisation?.name ?? user.roles.join(', ')}
      </span>
    </>
  );
}

function WhoPanel({ session, onSignOut }: Props) {
  const { user } = session;
  return (
    <div className="flex flex-col gap-8">
      <p className="text-table">
        <span className="block font-medium">{user.name}</span>
        <span className="block text-ink-soft">
          {[user.roles.join(', '), user.organisation?.name].filter(Boolean).join(' · ')}
        </span>
        <span className="mono text-note text-ink-soft">{user.timeZone}</span>
      </p>
      <DeviceSettings />
      <ul className="flex flex-col text-table">
        <li>
          <Link to={paths.watches}>What you asked to be told</Link>
        </li>
        {session.demoMailbox ? (
          <>
            <li>
              <Link to={paths.demoCases}>What to look at in this demo</Link>
            </li>
            <li>
              <a href={paths.demoMailbox}>Mailbox of this demo</a>
            </li>
          </>
        ) : null}
        <li>
          <button type="button" className="link" onClick={onSignOut}>
            Sign out
          </button>
        </li>
      </ul>
    </div>
  );
}
