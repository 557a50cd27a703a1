import { cpSync, mkdtempSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { createVitest } from 'vitest/node';
import { root } from '../lib/settings.mjs';
import { print, seconds } from '../lib/steps.mjs';
import { historyMutations } from './history.mjs';
import { passageMutations } from './passages.mjs';
import { passMutations } from './passes.mjs';
import { projectionMutations } from './projections.mjs';
import { stayMutations } from './stays.mjs';

/**
 * One rule dropped: in `file` the text `from`, which stands there once, becomes `to`. `tests`
 * names the suite of which at least one test must then fail.
 *
 * @typedef {{ rule: string, file: string, from: string, to: string, tests: keyof typeof suites }} Mutation
 */

/** The quickest tests that know a rule: a project and parts of file names. */
const suites = {
  rules: { project: 'unit', files: ['tests/unit/movements/', 'tests/unit/theil-sen.test.ts'] },
  running: { project: 'unit', files: ['tests/properties/running-history.test.ts'] },
  lease: { project: 'db', files: ['tests/properties/db/worker-lease.test.ts'] },
};

/** Of the tree, what those tests load. */
const NEEDED = ['migrations', 'scripts', 'seeders', 'server', 'src', 'tests'].concat([
  'package.json',
  'tsconfig.json',
  'vite.config.ts',
]);

/** @type {Mutation[]} */
const mutations = [
  ...passageMutations,
  ...passMutations,
  ...stayMutations,
  ...historyMutations,
  ...projectionMutations,
];

const only = process.argv[2] ?? '';
const wanted = mutations.filter(({ rule, file, tests }) =>
  `${rule} ${file} ${tests}`.includes(only),
);
const copy = mkdtempSync(path.join(os.tmpdir(), 'fishplate-mutations-'));
process.once('exit', () => rmSync(copy, { recursive: true, force: true }));
process.once('SIGTERM', () => process.exit(143));
for (const name of NEEDED) {
  cpSync(path.join(root, name), path.join(copy, name), { recursive: true });
}
symlinkSync(path.join(root, 'node_modules'), path.join(copy, 'node_modules'));

const vitest = await createVitest('test', {
  root: copy,
  watch: false,
  bail: 1,
  reporters: [{}],
  maxWorkers: 1,
});
await vitest.standalone();
for (const suite of new Set(wanted.map(({ tests }) => tests))) {
  const { failed, passed } = await runSuite(suite);
  if (failed || !passed) throw new Error(`The suite “${suite}” fails without any mutation.`);
}
let caught = 0;
for (const mutation of wanted) {
  const begun = Date.now();
  const fault = await faultOf(mutation);
  if (!fault) caught += 1;
  print(`${fault ? `NOT CAUGHT (${fault})` : 'caught'}  ${mutation.rule} (${seconds(begun)} s)`);
}
await vitest.close();
print(`${caught} of ${wanted.length} caught`);
// What a dropped rule has left hanging must not keep this process.
process.exit(0);

/** Why the mutation counts as not caught; null when a test failed as it should. */
async function faultOf({ file, from, to, tests }) {
  const place = path.join(copy, file);
  const text = readFileSync(place, 'utf8');
  const times = text.split(from).length - 1;
  if (times !== 1) return `its text stands ${times} times in ${file}`;
  change(
    place,
    text.replace(from, () => to),
  );
  try {
    const { failed, passed } = await runSuite(tests);
    if (failed) return null;
    return passed ? 'all tests pass' : 'no test could be loaded';
  } finally {
    change(place, text);
  }
}

function change(place, text) {
  writeFileSync(place, text);
  vitest.invalidateFile(place);
}

/** How many tests failed and passed; a file that cannot be loaded counts as neither. */
async function runSuite(name) {
  const { project, files } = suites[name];
  const found = await vitest.globTestSpecifications(files);
  const own = found.filter((specification) => specification.project.name === project);
  const { testModules } = await vitest.runTestSpecifications(own, true);
  const tests = testModules.flatMap((module) => [...module.children.allTests()]);
  const count = (state) => tests.filter((test) => test.result().state === state).length;
  return { failed: count('failed'), passed: count('passed') };
}
