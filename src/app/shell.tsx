import { useEffect, useRef } from 'react';
import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Navigate, Outlet, useLocation, useNavigate, useNavigation } from 'react-router-dom';
import { ErrorNotice } from '../components/ui/notice';
import { useLiveUpdates } from '../features/live/use-live-updates';
import { sessionQuery } from '../features/session/api/session';
import { signOut } from '../features/session/api/sign-out';
import { SignInAgain } from '../features/session/components/sign-in-again';
import { paths } from '../lib/paths';
import { PhoneBar } from './phone-bar';
import { Sections } from './sections';
import { ShellHeader } from './shell-header';
import { StaleRule } from './stale-rule';

/** The frame of every screen behind sign-in: header, sections, the page, and on phones the bar below. */
export function Shell() {
  const session = useQuery(sessionQuery);
  const { pathname, search } = useLocation();
  const leave = useLeave();
  useLiveUpdates(Boolean(session.data));
  if (session.isPending) return null;
  if (session.isError) {
    return (
      <main className="inset py-32">
        <ErrorNotice
          what="Fishplate did not answer"
          error={session.error}
          onRetry={() => void session.refetch()}
        />
      </main>
    );
  }
  if (!session.data) return <Navigate to={paths.signIn(pathname + search)} replace />;
  return (
    <div className="flex min-h-full flex-col">
      <a href="#page" className="absolute -top-52 left-16 z-[1200] bg-paper px-12 py-4 focus:top-8">
        Go to the page
      </a>
      <ShellHeader session={session.data} onSignOut={() => void leave()} />
      <StaleRule />
      <Sections session={session.data} />
      <PageFrame />
      <PhoneBar session={session.data} />
      <SignInAgain onLeave={() => void leave()} />
    </div>
  );
}

/** Ends the session and forgets everything that was fetched under it. */
function useLeave() {
  const client = useQueryClient();
  const navigate = useNavigate();
  return async () => {
    await signOut();
    client.clear();
    await navigate(paths.signIn());
  };
}

function PageFrame() {
  const main = useRef<HTMLElement>(null);
  const { pathname } = useLocation();
  const isFirst = useRef(true);
  const { state } = useNavigation();
  useEffect(() => {
    if (isFirst.current) {
      isFirst.current = false;
      return;
    }
    window.scrollTo(0, 0);
    main.current?.focus({ preventScroll: true });
  }, [pathname]);
  return (
    <main
      id="page"
      ref={main}
      tabIndex={-1}
      aria-busy={state === 'loading'}
      className="flex-1 outline-none"
    >
      <Outlet />
    </main>
  );
}
