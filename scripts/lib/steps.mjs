/** Something a person can mend by what the message says; shown without a stack. */
export class Mend extends Error {}

const columns = 26;
let interrupted = false;

/** From now on steps that break off do so because we end, and say nothing of it. */
export function interruptSteps() {
  interrupted = true;
}

/** Runs one step and prints its name, its outcome in a few words, and how long it took. */
export async function step(name, act) {
  const begun = Date.now();
  const bar = progressBar(name);
  try {
    const outcome = await act(bar.show);
    bar.clear();
    print(`${name.padEnd(columns)} ${outcome ?? 'done'} (${seconds(begun)} s)`);
  } catch (error) {
    bar.clear();
    if (!interrupted) print(`${name.padEnd(columns)} failed (${seconds(begun)} s)`);
    throw error;
  }
}

export function print(line = '') {
  process.stdout.write(`${line}\n`);
}

export function seconds(begun) {
  return ((Date.now() - begun) / 1000).toFixed(1);
}

/**
 * On a terminal one line that is drawn anew; elsewhere a line at each tenth, so that a log stays
 * readable.
 */
function progressBar(name) {
  let drawn = false;
  let tenth = 0;
  return {
    show({ done, total, unit }) {
      const share = total > 0 ? Math.min(1, done / total) : 1;
      const text = `${bar(share)} ${String(Math.floor(share * 100)).padStart(3)} % of ${total} ${unit}`;
      // A step may count several things, one after the other.
      if (share * 10 < tenth) tenth = 0;
      if (process.stdout.isTTY) {
        drawn = true;
        process.stdout.write(`\r\x1b[K${name.padEnd(columns)} ${text}`);
      } else if (Math.floor(share * 10) > tenth) {
        tenth = Math.floor(share * 10);
        print(`${name.padEnd(columns)} ${text}`);
      }
    },
    clear() {
      if (drawn) process.stdout.write('\r\x1b[K');
    },
  };
}

function bar(share) {
  const full = Math.round(share * 24);
  return `[${'='.repeat(full)}${' '.repeat(24 - full)}]`;
}

/** Says what went wrong: in words for what a person can mend or a command said, else whole. */
export function complain(error) {
  const inWords = error instanceof Mend || error?.output !== undefined;
  process.stderr.write(`\n${inWords ? error.message : (error?.stack ?? error)}\n`);
}
