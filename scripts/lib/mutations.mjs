import path from 'node:path';
import { run } from './run.mjs';
import { cleanEnvironment, root } from './settings.mjs';

/**
 * Drops one rule of the movements after another, and counts which of them no test misses. In a
 * process of its own, which no setting of ours reaches.
 *
 * @param {{ only?: string, onLine: (line: string) => void }} options `only`: rules with this in
 *   their name or file
 * @returns {Promise<{ caught: number, survived: number }>}
 */
export async function runMutations({ only = '', onLine }) {
  const program = path.join(root, 'scripts/mutations/drop-rules.mjs');
  const env = cleanEnvironment({ NODE_ENV: 'test' });
  const output = await run(process.execPath, [program, only], { env, onLine });
  const [, caught, all] = /^(\d+) of (\d+) caught$/m.exec(output) ?? [];
  if (caught === undefined) throw new Error('The mutations were not counted.');
  return { caught: Number(caught), survived: Number(all) - Number(caught) };
}
