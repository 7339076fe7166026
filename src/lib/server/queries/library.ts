import type { Library } from '../../identity/method';
import { decodeLibrary } from '../../identity/library';
import type { Executor } from '../db/client';
import { getCurrentLibrary, getLibraryContent } from './methods';

const decoded = new Map<string, Library>();
const KEEP_DECODED = 4;

/** A library decoded once per process: content-addressed, so the hash is a safe key. */
export async function loadLibrary(db: Executor, id: string, sha256: string): Promise<Library> {
  const known = decoded.get(sha256);
  if (known) return known;
  const content = await getLibraryContent(db, id);
  if (!content) throw new Error(`library ${id} has no content`);
  const library = decodeLibrary(content, sha256);
  if (decoded.size >= KEEP_DECODED) decoded.delete(decoded.keys().next().value as string);
  decoded.set(sha256, library);
  return library;
}

/** The library a scan is compared against now, or null before the first method is effective. */
export async function loadCurrentLibrary(db: Executor): Promise<{ id: string; library: Library } | null> {
  const head = await getCurrentLibrary(db);
  return head && { id: head.id, library: await loadLibrary(db, head.id, head.sha256) };
}
