type Listener = () => void;

let ended = false;
let waiting: { resolve: () => void; reject: (reason: Error) => void }[] = [];
const listeners = new Set<Listener>();

const tell = () => listeners.forEach((listener) => listener());

/** Settles once the person has signed in again; rejects when they leave or the request is given up. */
export function waitForSignIn(signal?: AbortSignal): Promise<void> {
  const back = new Promise<void>((resolve, reject) => {
    waiting.push({ resolve, reject });
    signal?.addEventListener('abort', () => reject(new DOMException('Aborted', 'AbortError')));
  });
  if (!ended) {
    ended = true;
    tell();
  }
  return back;
}

/** Lets every held request go on. */
export function signedInAgain(): void {
  const held = waiting;
  waiting = [];
  ended = false;
  held.forEach(({ resolve }) => resolve());
  tell();
}

/** Gives every held request up; the caller takes the person to the sign-in page. */
export function leftInstead(): void {
  const held = waiting;
  waiting = [];
  ended = false;
  held.forEach(({ reject }) => reject(new Error('Signed out.')));
  tell();
}

/** For `useSyncExternalStore`: whether requests are held because the session ended. */
export const sessionGate = {
  subscribe: (listener: Listener): (() => void) => {
    listeners.add(listener);
    return () => listeners.delete(listener);
  },
  hasEnded: (): boolean => ended,
};
