import { spawnSync } from 'node:child_process';

/**
 * Runs a command to its end, without a terminal.
 *
 * @returns {{ ok: boolean, output: string }} whether it ended well, and what it printed
 */
export function run(command, args, options = {}) {
  const result = spawnSync(command, args, {
    encoding: 'utf8',
    stdio: ['ignore', 'pipe', 'pipe'],
    maxBuffer: 64 * 1024 * 1024,
    ...options,
  });
  const output = `${result.stdout ?? ''}${result.stderr ?? ''}${result.error?.message ?? ''}`;
  return { ok: result.status === 0, output };
}
