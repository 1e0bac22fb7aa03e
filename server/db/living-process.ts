import { readFileSync } from 'node:fs';

/**
 * A process as `id beginning`: ids are given again, the moment of the beginning is not.
 *
 * @returns null where no such process lives
 */
export function processIdentity(pid: number): string | null {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, 'utf8');
    // Fields after the program's name, which may hold blanks; the 22nd of all is the beginning.
    const [state, ...fields] = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
    return state === 'Z' ? null : `${pid} ${fields[18]}`;
  } catch {
    return null;
  }
}

export const isLiving = (identity: string) =>
  processIdentity(Number.parseInt(identity, 10)) === identity;

/** The words of the command that a process runs; none where it does not live. */
export function commandOf(pid: number): string[] {
  try {
    return readFileSync(`/proc/${pid}/cmdline`, 'utf8').split('\0');
  } catch {
    return [];
  }
}
