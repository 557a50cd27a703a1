import { useSyncExternalStore } from 'react';
import { useQueryClient } from '@tanstack/react-query';
import { Dialog } from '../../../components/ui/dialog';
import { leftInstead, sessionGate, signedInAgain } from '../../../lib/session-gate';
import { sessionQuery } from '../api/session';
import { SignInForm } from './sign-in-form';

/** Sign-in over the page when the session has ended: what was being sent goes out afterwards. */
export function SignInAgain({ onLeave }: { onLeave: () => void }) {
  const ended = useSyncExternalStore(sessionGate.subscribe, sessionGate.hasEnded);
  const client = useQueryClient();
  if (!ended) return null;
  const known = client.getQueryData(sessionQuery.queryKey);
  const goOn = async () => {
    const before = known?.user.id;
    const now = await client.fetchQuery({ ...sessionQuery, staleTime: 0 });
    // Another person must not finish what this one began.
    if (now?.user.id !== before) window.location.assign('/');
    else signedInAgain();
  };
  return (
    <Dialog heading="Your session has ended" canClose={false} onClose={() => undefined}>
      <p className="mb-16 text-ink-soft">
        Sign in and go on where you were. Nothing you typed is lost.
      </p>
      <SignInForm email={known?.user.email ?? ''} onSignedIn={() => void goOn()} />
      <p className="mt-16 text-table">
        <button
          type="button"
          className="link"
          onClick={() => {
            leftInstead();
            onLeave();
          }}
        >
          Leave this page instead
        </button>
      </p>
    </Dialog>
  );
}
