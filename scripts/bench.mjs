import { readdirSync } from 'node:fs';
import path from 'node:path';
import { ensureModules } from './lib/modules.mjs';
import { checkNode, ensurePackages } from './lib/packages.mjs';
import { runTool } from './lib/run.mjs';
import { cleanEnvironment, root } from './lib/settings.mjs';
import { manageStopping } from './lib/stopping.mjs';
import { print } from './lib/steps.mjs';

const stopping = manageStopping();

/** Runs the measurements of bench/ one after the other, or those that are named. */
await stopping.guard(async () => {
  checkNode();
  await ensurePackages({});
  await ensureModules();
  const there = readdirSync(path.join(root, 'bench')).filter((name) => name.endsWith('.ts'));
  const wanted = process.argv.slice(2).map((name) => `${path.basename(name, '.ts')}.ts`);
  for (const name of wanted.length > 0 ? wanted : there.sort()) {
    await runTool('tsx', [path.join('bench', name)], { env: cleanEnvironment(), onLine: print });
  }
  await stopping.end('', 0);
});
