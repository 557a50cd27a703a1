import { ensureModules } from './lib/modules.mjs';
import { runMutations } from './lib/mutations.mjs';
import { checkNode, ensurePackages } from './lib/packages.mjs';
import { print } from './lib/steps.mjs';
import { manageStopping } from './lib/stopping.mjs';

/*
 * Drops one rule of the movements at a time and requires that a test fails for each:
 *   npm run mutations
 *   npm run mutations -- visit gap
 */
const stopping = manageStopping({ interrupted: 130 });

await stopping.guard(async () => {
  checkNode();
  await ensurePackages({});
  await ensureModules();
  const only = process.argv.slice(2).join(' ');
  const { survived } = await runMutations({ only, onLine: print });
  await stopping.end('', survived ? 1 : 0);
});
