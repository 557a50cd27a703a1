import { spawn } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { ensureBuilt } from './lib/build.mjs';
import { ensureModules } from './lib/modules.mjs';
import { runMutations } from './lib/mutations.mjs';
import { checkNode, ensurePackages } from './lib/packages.mjs';
import { runTool } from './lib/run.mjs';
import { cleanEnvironment, root } from './lib/settings.mjs';
import { manageStopping } from './lib/stopping.mjs';
import { complain, print, step } from './lib/steps.mjs';

const long = process.argv.includes('--long');
const counts = { passed: 0, failed: 0, skipped: 0 };
const env = cleanEnvironment({ NODE_ENV: 'test' });
const stopping = manageStopping({ interrupted: 130 });

await stopping.guard(async () => {
  try {
    await prepare();
    await Promise.all([check('Lint', lint), checkQuickly()]);
    await runTests();
    if (long) await dropRules();
  } catch (error) {
    counts.failed += 1;
    complain(error);
  }
  print(`\n${counts.passed} passed, ${counts.failed} failed, ${counts.skipped} skipped`);
  await stopping.end('', counts.failed === 0 ? 0 : 1);
});

async function prepare() {
  await step('Node', () => checkNode());
  await step('Debian packages', () => ensurePackages({ browser: true }));
  await step('Node packages', ensureModules);
}

/** Beside the linter, which takes as long as these together. */
async function checkQuickly() {
  await check('Format', () =>
    runTool('prettier', ['--check', '--log-level', 'warn', '.'], { env }),
  );
  await check('Types', () => runTool('tsc', ['-p', '.'], { env }));
  await check('Build', ensureBuilt);
}

/** Without a cache: a rule that reads types may find a fault in a file that has not changed. */
function lint() {
  return runTool('eslint', ['.', '--max-warnings', '0'], { env });
}

/** A check of the whole tree counts as one test. */
async function check(name, act) {
  try {
    await step(name, async () => {
      await act();
      return 'passed';
    });
    counts.passed += 1;
  } catch (error) {
    counts.failed += 1;
    print(error.output ?? String(error.stack ?? error));
  }
}

/** All tests in one run of vitest, which brings its own throw-away database. */
async function runTests() {
  const place = mkdtempSync(path.join(os.tmpdir(), 'fishplate-results-'));
  const file = path.join(place, 'results.json');
  const parameters = ['run', '--reporter=default', '--reporter=json', `--outputFile.json=${file}`];
  try {
    const code = await runVitest(parameters);
    addResults(JSON.parse(readFileSync(file, 'utf8')), code);
  } finally {
    rmSync(place, { recursive: true, force: true });
  }
}

function addResults({ testResults }, code) {
  const failedBefore = counts.failed;
  for (const { status, assertionResults } of testResults) {
    const states = assertionResults.map((result) => result.status);
    counts.passed += states.filter((state) => state === 'passed').length;
    counts.failed += states.filter((state) => state === 'failed').length;
    counts.skipped += states.filter((state) => !['passed', 'failed'].includes(state)).length;
    // A file that could not even be loaded has no tests to count.
    if (status === 'failed' && !states.includes('failed')) counts.failed += 1;
  }
  // What vitest finds beyond single tests: errors that nobody caught, a start that failed.
  if (code !== 0 && counts.failed === failedBefore) counts.failed += 1;
}

/** Each rule of the movements that a test misses when it is dropped counts as a test passed. */
async function dropRules() {
  const { caught, survived } = await runMutations({ onLine: print });
  counts.passed += caught;
  counts.failed += survived;
}

/** The runner ends its own database when it is told to end, so it is told and waited for. */
function runVitest(parameters) {
  return new Promise((resolve, reject) => {
    const program = path.join(root, 'node_modules/.bin/vitest');
    const child = spawn(process.execPath, [program, ...parameters], {
      cwd: root,
      env: { ...env, ...(long && { TEST_MODE: 'long' }) },
      stdio: ['ignore', 'inherit', 'inherit'],
      detached: true,
    });
    const exited = new Promise((done) => child.once('exit', done));
    stopping.onStop(async () => {
      if (child.exitCode === null && child.signalCode === null) child.kill('SIGTERM');
      await exited;
    });
    child.once('error', reject);
    void exited.then(resolve);
  });
}
