import { watchParents } from './processes.mjs';
import { stopRunning } from './run.mjs';
import { complain, interruptSteps, print } from './steps.mjs';

/**
 * One way to end for a script that has started others: on Ctrl-C, SIGTERM, the death of its
 * parent, a failure. What was started last is stopped first. `interrupted` is the exit code when
 * somebody ended it: 0 where that is how it ends, another where its work was not done.
 */
export function manageStopping({ interrupted = 0 } = {}) {
  const acts = [];
  let ending = null;
  let failure = null;

  const end = (why, code) => {
    ending ??= (async () => {
      interruptSteps();
      if (why) print(`\n${why}: stopping`);
      stopRunning();
      for (const act of acts.reverse()) await attempt(act);
      if (why) print('stopped');
      process.exit(code);
    })();
    return ending;
  };

  process.on('SIGINT', () => void end('Ctrl-C', interrupted));
  process.on('SIGTERM', () => void end('SIGTERM', interrupted));
  process.on('SIGHUP', () => void end('SIGHUP', interrupted));
  // A pipe that nobody reads any more must not end us before what we started has ended.
  process.stdout.on('error', () => {});
  process.stderr.on('error', () => {});
  watchParents(() => void end('The process that started this one has gone', interrupted));

  return {
    end,
    onStop: (act) => acts.push(act),
    reason: () => failure ?? new Error('A part stopped by itself.'),
    /** Ends everything, badly, when the promise resolves before we end by ourselves. */
    failWhen: (promise, why) => {
      void promise.then(() => {
        if (ending) return;
        failure = new Error(why());
        complain(failure.message);
        void end('', 1);
      });
    },
    /** Runs the script's work; a fault in it ends everything with 1. */
    guard: async (work) => {
      try {
        await work();
      } catch (error) {
        if (!ending) complain(error);
        await end('', 1);
      }
    },
  };
}

async function attempt(act) {
  try {
    await act();
  } catch (error) {
    complain(error);
  }
}
