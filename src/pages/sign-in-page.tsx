import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Navigate, useSearchParams } from 'react-router-dom';
import { Wordmark } from '../components/ui/plate';
import { sessionQuery } from '../features/session/api/session';
import { SignInForm } from '../features/session/components/sign-in-form';
import { useTitle } from '../lib/use-title';

/** Only an address of our own may be gone back to. */
const safeBack = (back: string | null): string => (back && /^\/(?![/\\])/.test(back) ? back : '/');

/** Sign-in; whoever is signed in already goes on to where they wanted. */
export function SignInPage() {
  useTitle('Sign in');
  const session = useQuery(sessionQuery);
  const client = useQueryClient();
  const [parameters] = useSearchParams();
  const back = safeBack(parameters.get('back'));
  if (session.data) return <Navigate to={back} replace />;
  return (
    <div className="flex min-h-full flex-col">
      <header className="inset flex h-48 flex-none items-center bg-creosote text-on-creosote">
        <Wordmark />
      </header>
      <div aria-hidden="true" className="sections min-h-20" />
      <main className="inset grid w-full max-w-[1120px] gap-32 py-52 md:grid-cols-[1fr_360px] md:gap-52">
        <h1 className="max-w-[20ch] text-sentence-narrow font-normal text-pretty sm:text-sentence">
          Where each car and box is, since when, and how it got there.
        </h1>
        <div className="border-t border-ink pt-16">
          <h2 className="mb-16 text-lead">Sign in</h2>
          <SignInForm
            onSignedIn={() => void client.invalidateQueries({ queryKey: sessionQuery.queryKey })}
          />
        </div>
      </main>
    </div>
  );
}
