import { hash, verify } from '@node-rs/argon2';

/** Argon2id with the parameters of RFC 9106's second choice scaled to a web server: 19 MiB, 2 passes. */
const cost = { memoryCost: 19_456, timeCost: 2, parallelism: 1 };

/** The hash under which a password is kept: argon2id with its salt and cost. */
export const hashPassword = (password: string): Promise<string> => hash(password, cost);

let decoy: Promise<string> | undefined;

/**
 * Whether the password is right. Without a hash (no such person) it takes as long and says no, so that
 * neither the answer nor its time tells which part was wrong.
 */
export async function passwordMatches(
  passwordHash: string | null,
  password: string,
): Promise<boolean> {
  decoy ??= hashPassword('a password that nobody has');
  const matches = await verify(passwordHash ?? (await decoy), password);
  return passwordHash !== null && matches;
}
