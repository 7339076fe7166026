import { createHash } from 'node:crypto';
import type { Transaction } from '../db/client';
import { rawFiles } from '../db/schema';

export interface IncomingFile {
  /** Name the sender gave it: kept to be shown, never used as a path. */
  readonly fileName: string;
  readonly mediaType: string;
  readonly bytes: Uint8Array;
}

/** SHA-256 of bytes, hex. */
export const sha256Hex = (bytes: Uint8Array): string => createHash('sha256').update(bytes).digest('hex');

/** Stores bytes as they came. In the caller's transaction, so that no record is without its bytes. */
export async function keepRawFile(
  tx: Transaction,
  file: IncomingFile
): Promise<{ id: string; sha256: string }> {
  const sha256 = sha256Hex(file.bytes);
  const [row] = await tx
    .insert(rawFiles)
    .values({
      sha256,
      bytes: file.bytes,
      size: file.bytes.byteLength,
      fileName: file.fileName.slice(0, 255),
      mediaType: file.mediaType.slice(0, 120) || 'application/octet-stream'
    })
    .returning({ id: rawFiles.id });
  return { id: row.id, sha256 };
}
