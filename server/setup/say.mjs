/** Says one line to the person at the terminal. */
export function say(line) {
  process.stdout.write(`${line}\n`);
}

/** Ends set-up with one clear sentence that says what to do. */
export class SetupError extends Error {}
