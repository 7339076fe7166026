import { readdir, readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';
import { mailFolder } from './env';

const caughtMailSchema = z.object({
  id: z.string(),
  receivedAt: z.string(),
  to: z.string(),
  subject: z.string(),
  text: z.string()
});
export type CaughtMail = z.output<typeof caughtMailSchema>;

/** The newest mails that the local mail catcher has kept (demo only); empty where there is no catcher. */
export async function readCaughtMails(limit = 50): Promise<CaughtMail[]> {
  const folder = mailFolder();
  if (!folder) return [];
  const names = (await readdir(folder).catch(() => [])).filter((name) => name.endsWith('.json'));
  const newest = names.sort().reverse().slice(0, limit);
  const read = await Promise.all(newest.map((name) => readFile(join(folder, name), 'utf8')));
  return read.map((content) => caughtMailSchema.parse(JSON.parse(content)));
}
