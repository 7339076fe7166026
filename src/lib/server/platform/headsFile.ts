import { appendFile, mkdir, open, readFile } from 'node:fs/promises';
import { dirname } from 'node:path';
import { z } from 'zod';
import type { PublicKey, TreeHead } from './trailKey';

/** A head as the file outside the database keeps it, one JSON object a line. */
export interface OutsideHead extends TreeHead {
  /** Printed with each head, so that one signed by a key that has since been replaced still verifies. */
  readonly publicKey: PublicKey;
}

const lineSchema = z.object({
  size: z.number().int().nonnegative(),
  rootHash: z.string().regex(/^[0-9a-f]{64}$/),
  at: z.string(),
  keyId: z.string(),
  signature: z.string(),
  publicKey: z.string()
});

/** Appends heads and waits until the disk has them. */
export async function appendHeads(file: string, heads: readonly OutsideHead[]): Promise<void> {
  if (heads.length === 0) return;
  await mkdir(dirname(file), { recursive: true });
  await appendFile(file, heads.map((head) => `${JSON.stringify(head)}\n`).join(''));
  const handle = await open(file, 'r+');
  try {
    await handle.sync();
  } finally {
    await handle.close();
  }
}

export interface ReadHeads {
  readonly heads: readonly OutsideHead[];
  /** Numbers of lines that are no head. A last line without its line feed was cut off by a crash and is left out. */
  readonly badLines: readonly number[];
}

/** All heads of the file; none where there is no file yet. */
export async function readHeads(file: string): Promise<ReadHeads> {
  let text: string;
  try {
    text = await readFile(file, 'utf8');
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT')
      return { heads: [], badLines: [] };
    throw error;
  }
  const heads: OutsideHead[] = [];
  const badLines: number[] = [];
  for (const [index, line] of text.split('\n').slice(0, -1).entries()) {
    const head = lineSchema.safeParse(parsed(line));
    if (head.success) heads.push(head.data);
    else badLines.push(index + 1);
  }
  return { heads, badLines };
}

function parsed(line: string): unknown {
  try {
    return JSON.parse(line);
  } catch {
    return null;
  }
}
