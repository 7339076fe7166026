import { eq } from 'drizzle-orm';
import { whyNoMethod, type ReferenceKind } from '../../domain/materials';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import { readSpectrumFile } from '../../spectra/formats/formats';
import type { Database } from '../db/client';
import { materials, rawFiles, referenceSpectra } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { nextNumber } from '../platform/numberSeries';
import { keepRawFile, sha256Hex, type IncomingFile } from '../platform/rawFiles';
import { recordTrail } from '../platform/trail';

export interface NewReference {
  readonly materialId: string;
  readonly kind: ReferenceKind;
  readonly sourceLot: string;
  readonly certificate: string;
  readonly independentIdentity: string;
  readonly instrumentId: string | null;
  readonly excitationNm: number;
}

/** Adds a reference spectrum as a draft. The same bytes cannot be added twice, under whatever name. */
export async function addReference(
  db: Database,
  act: Act,
  input: NewReference,
  file: IncomingFile
): Promise<Outcome<{ id: string; number: string }>> {
  if (!can(act.actor, 'reference.write'))
    return refuse('not-allowed', 'Adding references is for method owners.');
  if (input.sourceLot.trim() === '')
    return refuse('bad-input', 'Enter the lot the reference was taken from.', {
      sourceLot: 'Enter the lot the reference was taken from'
    });
  const read = readSpectrumFile(file.bytes, {});
  if (!read.ok) return refuse('bad-file', read.problem.message, { file: read.problem.message });
  const stated = read.acquisition.excitationNm;
  if (stated !== undefined && Math.abs(stated - input.excitationNm) > 1) {
    const sentence = `The file says ${stated} nm but ${input.excitationNm} nm was entered`;
    return refuse('bad-input', `${sentence}.`, { excitationNm: sentence });
  }
  if (read.spectrum.intensity.every((value) => value === 0))
    return refuse('bad-file', 'Every intensity in the file is zero.', {
      file: 'Every intensity in the file is zero'
    });
  return transact(db, async (tx) => {
    const [material] = await tx.select().from(materials).where(eq(materials.id, input.materialId));
    if (!material) return refuse('not-found', 'There is no such material.');
    const barred = whyNoMethod(material);
    if (barred) return refuse('wrong-state', barred);
    const [same] = await tx
      .select({ number: referenceSpectra.number, material: materials.name })
      .from(referenceSpectra)
      .innerJoin(rawFiles, eq(rawFiles.id, referenceSpectra.rawFileId))
      .innerJoin(materials, eq(materials.id, referenceSpectra.materialId))
      .where(eq(rawFiles.sha256, sha256Hex(file.bytes)));
    if (same)
      return refuse(
        'already-exists',
        `The same bytes are reference ${same.number} of ${same.material} already.`,
        { file: `The same bytes are reference ${same.number} already` }
      );
    const raw = await keepRawFile(tx, file);
    const number = await nextNumber(tx, 'RS');
    const { spectrum } = read;
    const [row] = await tx
      .insert(referenceSpectra)
      .values({
        number,
        materialId: input.materialId,
        rawFileId: raw.id,
        kind: input.kind,
        sourceLot: input.sourceLot.trim(),
        certificate: input.certificate.trim(),
        independentIdentity: input.independentIdentity.trim(),
        instrumentId: input.instrumentId,
        excitationNm: String(input.excitationNm),
        quality: {
          points: spectrum.shiftCm1.length,
          firstCm1: spectrum.shiftCm1[0],
          lastCm1: spectrum.shiftCm1[spectrum.shiftCm1.length - 1],
          notes: read.notes
        },
        addedBy: act.actor.id
      })
      .returning({ id: referenceSpectra.id });
    await recordTrail(tx, act, {
      action: 'reference.add',
      recordType: 'reference',
      recordId: row.id,
      recordLabel: `Reference ${number} of ${material.name}`,
      after: { number, ...input, fileName: file.fileName.slice(0, 255), sha256: raw.sha256 }
    });
    return done({ id: row.id, number });
  });
}

/** Accepts or rejects a draft reference, with a reason. */
export async function decideReference(
  db: Database,
  act: Act,
  id: string,
  status: 'accepted' | 'rejected',
  reason: string
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'reference.write'))
    return refuse('not-allowed', 'Deciding references is for method owners.');
  if (reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  return transact(db, async (tx) => {
    const [row] = await tx.select().from(referenceSpectra).where(eq(referenceSpectra.id, id)).for('update');
    if (!row) return refuse('not-found', 'There is no such reference.');
    if (row.status !== 'draft') return refuse('wrong-state', `The reference is ${row.status} already.`);
    await tx
      .update(referenceSpectra)
      .set({ status, statusReason: reason.trim() })
      .where(eq(referenceSpectra.id, id));
    await recordTrail(tx, act, {
      action: status === 'accepted' ? 'reference.accept' : 'reference.reject',
      recordType: 'reference',
      recordId: id,
      recordLabel: `Reference ${row.number}`,
      before: { status: row.status },
      after: { status },
      reason: reason.trim()
    });
    return done({ id });
  });
}
