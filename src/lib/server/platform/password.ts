import { hash, verify } from '@node-rs/argon2';

/** Cost of one hash: OWASP's argon2id setting, 19 MiB, two passes, one lane. */
export interface PasswordCost {
  readonly memoryKib: number;
  readonly passes: number;
}
export const PASSWORD_COST: PasswordCost = { memoryKib: 19_456, passes: 2 };

/** argon2's number of its "id" variant; the package's enum is const and cannot be imported here. */
const ARGON2ID = 2;

// The same person may type é as one character or as two: they are one password.
const normalised = (password: string) => password.normalize('NFKC');

/** The password's argon2id hash with its salt and cost, ready to be stored. */
export function hashPassword(password: string, cost: PasswordCost = PASSWORD_COST): Promise<string> {
  return hash(normalised(password), {
    algorithm: ARGON2ID,
    memoryCost: cost.memoryKib,
    timeCost: cost.passes,
    parallelism: 1
  });
}

let decoy: Promise<string> | undefined;

/**
 * Whether the password is the stored one. Where nothing is stored (no such account, no password yet) the same
 * work is done against a decoy, so that the time taken tells nothing of whether the account exists.
 */
export async function verifyPassword(stored: string | null | undefined, password: string): Promise<boolean> {
  decoy ??= hashPassword(crypto.randomUUID());
  const matches = await verify(stored ?? (await decoy), normalised(password));
  return matches && typeof stored === 'string';
}
