import path from 'node:path';
import { parseArgs } from 'node:util';
import { ensureBuilt } from './lib/build.mjs';
import { ensureModules } from './lib/modules.mjs';
import { checkNode } from './lib/packages.mjs';
import { reachDatabase } from './lib/running-database.mjs';
import { readSettings, root, setProduction } from './lib/settings.mjs';
import { Mend, print, seconds, step } from './lib/steps.mjs';
import { manageStopping } from './lib/stopping.mjs';

const usage = `Makes history anew from the reads, and writes what comes out otherwise.

  npm run rebuild -- --all
  npm run rebuild -- --site ALDER [--from 2026-03-04] [--until 2026-03-05T12:00Z]
  npm run rebuild -- --car QTKX40127
  npm run rebuild -- --from 2026-03-04 --until 2026-03-05
  npm run rebuild -- --resume

Days and times are UTC unless they say otherwise. It may run beside the server, and while reads
come in. Ctrl-C stops it; --resume goes on where it stopped.`;

const abort = new AbortController();
const stopping = manageStopping({ interrupted: 130 });
const begun = Date.now();
let working = Promise.resolve();
let reported = false;

await stopping.guard(async () => {
  const options = readOptions();
  if (options === null) {
    print(usage);
    return stopping.end('', 0);
  }
  checkNode();
  const settings = readSettings();
  await ensureModules();
  await step('Programs', ensureBuilt);
  const url = await reachDatabase(settings, stopping);
  setProduction();
  const program = await import(path.join(root, 'dist/server/rebuild.js'));
  stopping.onStop(() => {
    abort.abort();
    return working;
  });
  const outcome = await run(program, url, options);
  report(outcome);
  await stopping.end('', outcome.state === 'stopped' ? 1 : 0);
});

function readOptions() {
  const text = { type: 'string' };
  const flag = { type: 'boolean' };
  const options = {
    all: flag,
    resume: flag,
    help: flag,
    site: text,
    car: text,
    from: text,
    until: text,
  };
  try {
    const { values } = parseArgs({ options, strict: true });
    return values.help || Object.keys(values).length === 0 ? null : values;
  } catch (error) {
    throw new Mend(`${error.message}\n\n${usage}`);
  }
}

async function run(program, url, options) {
  let outcome;
  await step('Rebuild', async (show) => {
    const work = program.rebuild(url, options, { show, signal: abort.signal });
    working = work.then(
      (stopped) => abort.signal.aborted && report(stopped),
      () => {},
    );
    try {
      outcome = await work;
    } catch (error) {
      throw error.name === 'Refused' ? new Mend(error.message) : error;
    }
    return outcome.state;
  });
  return outcome;
}

function report({ state, readPoints }) {
  if (reported) return;
  reported = true;
  const places = `${readPoints} read point${readPoints === 1 ? '' : 's'}`;
  if (state === 'nothing') print('There is nothing to make anew.');
  else if (state === 'done') print(`History of ${places} made anew in ${seconds(begun)} s.`);
  else print('Stopped. What was made anew stays; npm run rebuild -- --resume goes on.');
}
