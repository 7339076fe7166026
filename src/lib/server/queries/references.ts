import { and, asc, eq, inArray } from 'drizzle-orm';
import type { LabelledReference } from '../../identity/method';
import { readSpectrumFile } from '../../spectra/formats/formats';
import type { Executor } from '../db/client';
import { instruments, materials, rawFiles, referenceSpectra } from '../db/schema';

/** References of a material, for its page. */
export async function listReferences(db: Executor, materialId: string) {
  return db
    .select({
      id: referenceSpectra.id,
      number: referenceSpectra.number,
      kind: referenceSpectra.kind,
      sourceLot: referenceSpectra.sourceLot,
      certificate: referenceSpectra.certificate,
      independentIdentity: referenceSpectra.independentIdentity,
      excitationNm: referenceSpectra.excitationNm,
      status: referenceSpectra.status,
      statusReason: referenceSpectra.statusReason,
      instrument: instruments.name,
      fileName: rawFiles.fileName,
      sha256: rawFiles.sha256,
      addedAt: referenceSpectra.addedAt
    })
    .from(referenceSpectra)
    .innerJoin(rawFiles, eq(rawFiles.id, referenceSpectra.rawFileId))
    .leftJoin(instruments, eq(instruments.id, referenceSpectra.instrumentId))
    .where(eq(referenceSpectra.materialId, materialId))
    .orderBy(asc(referenceSpectra.number));
}

/** References with their spectra, as the fitter takes them. A stored file that no longer reads is a bug. */
export async function loadLabelledReferences(
  db: Executor,
  referenceIds: string[]
): Promise<LabelledReference[]> {
  if (referenceIds.length === 0) return [];
  const rows = await db
    .select({
      id: referenceSpectra.id,
      number: referenceSpectra.number,
      sourceLot: referenceSpectra.sourceLot,
      bytes: rawFiles.bytes
    })
    .from(referenceSpectra)
    .innerJoin(rawFiles, eq(rawFiles.id, referenceSpectra.rawFileId))
    .where(inArray(referenceSpectra.id, referenceIds))
    .orderBy(asc(referenceSpectra.number));
  return rows.map((row) => {
    const read = readSpectrumFile(row.bytes, {});
    if (!read.ok) throw new Error(`reference ${row.number} cannot be read: ${read.problem.message}`);
    return { id: row.id, source: row.sourceLot, spectrum: read.spectrum };
  });
}

/** Accepted references of a material, at an excitation wavelength. */
export async function listAcceptedReferenceIds(
  db: Executor,
  materialId: string
): Promise<{ id: string; excitationNm: number }[]> {
  const rows = await db
    .select({ id: referenceSpectra.id, excitationNm: referenceSpectra.excitationNm })
    .from(referenceSpectra)
    .where(and(eq(referenceSpectra.materialId, materialId), eq(referenceSpectra.status, 'accepted')))
    .orderBy(asc(referenceSpectra.number));
  return rows.map((row) => ({ id: row.id, excitationNm: Number(row.excitationNm) }));
}

/** Active materials that can have a method, for the library. */
export async function listMaterials(db: Executor) {
  return db.select().from(materials).orderBy(asc(materials.name));
}

export async function getMaterial(db: Executor, id: string) {
  const [row] = await db.select().from(materials).where(eq(materials.id, id));
  return row ?? null;
}
