import { spawn, spawnSync } from 'node:child_process';
import path from 'node:path';
import { environment, root } from './settings.mjs';

const running = new Set();

/** A command ended badly; `output` is all that it said. */
export class CommandFailed extends Error {
  constructor(command, code, output) {
    super(`${command} ended with ${code}.\n${output.split('\n').slice(-40).join('\n')}`);
    this.output = output;
  }
}

/**
 * Runs a command and gives what it said. Nothing of it is shown while all goes well.
 *
 * @param {string} command
 * @param {string[]} parameters
 * @param {{ env?: NodeJS.ProcessEnv, onLine?: (line: string) => void }} [options]
 * @returns {Promise<string>}
 */
export function run(command, parameters, { env = environment(), onLine } = {}) {
  return new Promise((resolve, reject) => {
    const child = spawn(command, parameters, { cwd: root, env, stdio: ['ignore', 'pipe', 'pipe'] });
    running.add(child);
    let output = '';
    const take = (chunk) => {
      output += chunk;
      if (onLine) for (const line of String(chunk).split('\n')) if (line.trim()) onLine(line);
    };
    child.stdout.on('data', take);
    child.stderr.on('data', take);
    child.once('error', (error) => {
      running.delete(child);
      reject(error);
    });
    child.once('close', (code, signal) => {
      running.delete(child);
      if (code === 0) resolve(output);
      else reject(new CommandFailed([command, ...parameters].join(' '), code ?? signal, output));
    });
  });
}

/** Runs a program of node_modules/.bin with the present Node. */
export function runTool(name, parameters, options) {
  return run(
    process.execPath,
    [path.join(root, 'node_modules/.bin', name), ...parameters],
    options,
  );
}

/** Ends what `run` has under way. */
export function stopRunning() {
  for (const child of running) child.kill('SIGTERM');
}

/** True when the command can be found and answers with 0. */
export function succeeds(command, parameters) {
  return spawnSync(command, parameters, { stdio: 'ignore' }).status === 0;
}
