import { and, desc, eq, inArray } from 'drizzle-orm';
import type { FittedMethod } from '../../identity/method';
import type { Executor } from '../db/client';
import {
  libraries,
  materials,
  methodVersionReferences,
  methodVersions,
  methods,
  referenceSpectra
} from '../db/schema';

/** A fitted method as it is stored: the parsed bundle with its hash. */
export interface StoredMethod {
  readonly versionId: string;
  readonly version: number;
  readonly code: string;
  readonly materialId: string;
  readonly status: string;
  readonly fitted: FittedMethod;
  readonly sha256: string;
}

const parsed = new Map<string, FittedMethod>();
const KEEP_PARSED = 200;

/** Parses a bundle once per hash: the content is immutable, so the hash is a safe key. */
function parseBundle(bundle: Uint8Array, sha256: string): FittedMethod {
  const known = parsed.get(sha256);
  if (known) return known;
  const fitted = JSON.parse(new TextDecoder().decode(bundle)) as FittedMethod;
  if (parsed.size >= KEEP_PARSED) parsed.delete(parsed.keys().next().value as string);
  parsed.set(sha256, fitted);
  return fitted;
}

const storedColumns = {
  versionId: methodVersions.id,
  version: methodVersions.version,
  status: methodVersions.status,
  code: methods.code,
  materialId: methods.materialId,
  sha256: methodVersions.bundleSha256
};

/** The fitted method of a version, or null where it has none yet. */
export async function getStoredMethod(db: Executor, versionId: string): Promise<StoredMethod | null> {
  const [head] = await db
    .select(storedColumns)
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .where(eq(methodVersions.id, versionId));
  if (!head || head.sha256 === null) return null;
  let fitted = parsed.get(head.sha256);
  if (!fitted) {
    const [row] = await db
      .select({ bundle: methodVersions.bundle })
      .from(methodVersions)
      .where(eq(methodVersions.id, versionId));
    if (!row?.bundle) return null;
    fitted = parseBundle(row.bundle, head.sha256);
  }
  return { ...head, sha256: head.sha256, fitted };
}

/** Id of the material's effective version, or null. */
export async function getEffectiveVersionId(db: Executor, materialId: string): Promise<string | null> {
  const [row] = await db
    .select({ id: methodVersions.id })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .where(and(eq(methods.materialId, materialId), eq(methodVersions.status, 'effective')));
  return row?.id ?? null;
}

/** Newest library: what a scan is compared against now. */
export async function getCurrentLibrary(db: Executor) {
  const [head] = await db
    .select({ id: libraries.id, sha256: libraries.sha256, entryCount: libraries.entryCount })
    .from(libraries)
    .orderBy(desc(libraries.madeAt))
    .limit(1);
  return head ?? null;
}

/** Packed content of a library. */
export async function getLibraryContent(db: Executor, id: string): Promise<Uint8Array | null> {
  const [row] = await db.select({ content: libraries.content }).from(libraries).where(eq(libraries.id, id));
  return row?.content ?? null;
}

export async function listMethodVersions(db: Executor) {
  return db
    .select({
      id: methodVersions.id,
      code: methods.code,
      version: methodVersions.version,
      status: methodVersions.status,
      materialId: materials.id,
      itemCode: materials.itemCode,
      material: materials.name,
      authorName: methodVersions.authorName,
      effectiveAt: methodVersions.effectiveAt
    })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .innerJoin(materials, eq(materials.id, methods.materialId))
    .orderBy(methods.code, desc(methodVersions.version));
}

export async function getMethodVersion(db: Executor, id: string) {
  const [row] = await db
    .select({ version: methodVersions, method: methods, material: materials })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .innerJoin(materials, eq(materials.id, methods.materialId))
    .where(eq(methodVersions.id, id));
  return row ?? null;
}

/** References a version is built on. */
export async function listVersionReferences(db: Executor, versionId: string) {
  return db
    .select({ reference: referenceSpectra })
    .from(methodVersionReferences)
    .innerJoin(referenceSpectra, eq(referenceSpectra.id, methodVersionReferences.referenceId))
    .where(eq(methodVersionReferences.methodVersionId, versionId))
    .orderBy(referenceSpectra.number);
}

/** Versions in one of the given states, newest first. */
export async function listVersionsInState(
  db: Executor,
  statuses: (typeof methodVersions.$inferSelect)['status'][]
) {
  return db
    .select({
      id: methodVersions.id,
      code: methods.code,
      version: methodVersions.version,
      status: methodVersions.status,
      authorId: methodVersions.authorId,
      submittedAt: methodVersions.submittedAt
    })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .where(inArray(methodVersions.status, statuses))
    .orderBy(desc(methodVersions.createdAt));
}
