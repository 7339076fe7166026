import { asc, desc, eq } from 'drizzle-orm';
import { encodeLibrary, makeLibraryEntry } from '../../identity/library';
import type { LibraryEntry } from '../../identity/method';
import { readSpectrumFile } from '../../spectra/formats/formats';
import type { Transaction } from '../db/client';
import {
  libraries,
  materials,
  methodVersionReferences,
  methodVersions,
  methods,
  rawFiles,
  referenceSpectra
} from '../db/schema';
import { sha256Hex } from './rawFiles';

/**
 * Makes the library of all materials with an effective method, from the references those methods are built
 * on; nothing is added where the content is that of the current one. Called whenever a version becomes effective or
 * stops being so, in that transaction.
 */
export async function rebuildLibrary(tx: Transaction): Promise<{ id: string; sha256: string }> {
  const rows = await tx
    .select({
      materialId: materials.id,
      itemCode: materials.itemCode,
      name: materials.name,
      number: referenceSpectra.number,
      bytes: rawFiles.bytes
    })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .innerJoin(materials, eq(materials.id, methods.materialId))
    .innerJoin(methodVersionReferences, eq(methodVersionReferences.methodVersionId, methodVersions.id))
    .innerJoin(referenceSpectra, eq(referenceSpectra.id, methodVersionReferences.referenceId))
    .innerJoin(rawFiles, eq(rawFiles.id, referenceSpectra.rawFileId))
    .where(eq(methodVersions.status, 'effective'))
    .orderBy(asc(materials.itemCode), asc(referenceSpectra.number));
  const byMaterial = groupByMaterial(rows);
  const entries: LibraryEntry[] = [...byMaterial.values()].map((group) =>
    makeLibraryEntry(
      { materialId: group[0].materialId, itemCode: group[0].itemCode, name: group[0].name },
      group.map((row) => {
        const read = readSpectrumFile(row.bytes, {});
        if (!read.ok) throw new Error(`reference ${row.number} cannot be read: ${read.problem.message}`);
        return read.spectrum;
      })
    )
  );
  const content = encodeLibrary(entries);
  const sha256 = sha256Hex(content);
  const [current] = await tx
    .select({ id: libraries.id, sha256: libraries.sha256 })
    .from(libraries)
    .orderBy(desc(libraries.madeAt))
    .limit(1);
  if (current?.sha256 === sha256) return { id: current.id, sha256 };
  const [made] = await tx
    .insert(libraries)
    .values({ sha256, content, entryCount: entries.length })
    .returning({ id: libraries.id });
  return { id: made.id, sha256 };
}

function groupByMaterial<Row extends { materialId: string }>(rows: readonly Row[]): Map<string, Row[]> {
  const groups = new Map<string, Row[]>();
  for (const row of rows) groups.set(row.materialId, [...(groups.get(row.materialId) ?? []), row]);
  return groups;
}
