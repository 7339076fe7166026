/**
 * Fills an empty database with the demo plant (scripts/demo): people, materials, references, methods, instruments,
 * deliveries in every state. Everything is done through the same commands as the pages use, so that every act is on
 * the trail. Does nothing where a site exists. DATABASE_URL: the application's role. DEMO_ACCOUNTS_FILE: where the
 * accounts are written for the sign-in page; sample spectra to try go beside it.
 */
import { mkdirSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { ROLE_NAMES } from '../src/lib/domain/roles';
import { closeDatabase, database } from '../src/lib/server/db/client';
import { sites } from '../src/lib/server/db/schema';
import { sealNow } from '../src/lib/server/platform/sealer';
import { makePlant } from './demo/makePlant';
import { makeDeliveries } from './demo/makeDeliveries';
import { PEOPLE } from './demo/scenario';
import { writeSamples } from './demo/samples';

async function seed(): Promise<void> {
  const db = database();
  if ((await db.$count(sites)) > 0) return;
  const plant = await makePlant(db);
  // The released lot's certificate prints a tree head, so there must be one.
  await sealNow(db);
  const lots = await makeDeliveries(db, plant);
  await sealNow(db);
  const accountsFile = process.env.DEMO_ACCOUNTS_FILE;
  if (!accountsFile) return;
  const accounts = PEOPLE.map(({ userName, password, printedName, roles }) => ({
    userName,
    password,
    printedName,
    role: roles.map((role) => ROLE_NAMES[role]).join(', ')
  }));
  mkdirSync(dirname(accountsFile), { recursive: true });
  writeFileSync(accountsFile, `${JSON.stringify(accounts, null, 2)}\n`);
  writeSamples(join(dirname(accountsFile), 'demo-spectra'), lots);
}

try {
  await seed();
} finally {
  await closeDatabase();
}
