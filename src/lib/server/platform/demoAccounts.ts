import { readFile } from 'node:fs/promises';
import { z } from 'zod';
import { demoAccountsFile, demoMode } from './env';

const accountsSchema = z.array(
  z.object({ userName: z.string(), password: z.string(), printedName: z.string(), role: z.string() })
);
export type DemoAccount = z.output<typeof accountsSchema>[number];

/** The made-up accounts that the sign-in page lists; none anywhere but in the demo. */
export async function readDemoAccounts(): Promise<DemoAccount[]> {
  const file = demoAccountsFile();
  if (!demoMode() || !file) return [];
  try {
    return accountsSchema.parse(JSON.parse(await readFile(file, 'utf8')));
  } catch {
    // The page works without the list: the seed has not written it yet, or writes it now.
    return [];
  }
}
