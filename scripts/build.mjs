import { ensureBuilt } from './lib/build.mjs';
import { complain, step } from './lib/steps.mjs';

try {
  await step('Client and server', ensureBuilt);
} catch (error) {
  complain(error);
  process.exitCode = 1;
}
