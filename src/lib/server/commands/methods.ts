import { and, eq, max } from 'drizzle-orm';
import { canonicalJson } from '../../identity/canonicalJson';
import { fitMethod } from '../../identity/fitMethod';
import type { MethodDefinition } from '../../identity/method';
import { whyNoMethod } from '../../domain/materials';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database, Transaction } from '../db/client';
import { materials, methodVersionReferences, methodVersions, methods } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { rebuildLibrary } from '../platform/library';
import { sha256Hex } from '../platform/rawFiles';
import { proveIdentity, sign } from '../platform/signing';
import { recordTrail } from '../platform/trail';
import { getMethodVersion } from '../queries/methods';
import { listAcceptedReferenceIds, loadLabelledReferences } from '../queries/references';

export interface NewMethodVersion {
  readonly materialId: string;
  readonly definition: MethodDefinition;
  readonly intendedUse: string;
  readonly changeReason: string;
  readonly referenceIds: readonly string[];
}

/** Makes the next draft version of a material's method. Materials without a first-order spectrum get none. */
export async function createMethodVersion(
  db: Database,
  act: Act,
  input: NewMethodVersion
): Promise<Outcome<{ id: string; version: number }>> {
  if (!can(act.actor, 'method.write')) return refuse('not-allowed', 'Writing methods is for method owners.');
  return transact(db, async (tx) => {
    const [material] = await tx
      .select()
      .from(materials)
      .where(eq(materials.id, input.materialId))
      .for('update');
    if (!material) return refuse('not-found', 'There is no such material.');
    const barred = whyNoMethod(material);
    if (barred) return refuse('wrong-state', barred);
    const accepted = new Set((await listAcceptedReferenceIds(tx, material.id)).map((row) => row.id));
    if (input.referenceIds.length === 0)
      return refuse('bad-input', 'Choose the references the method is built on.', {
        referenceIds: 'Choose at least one accepted reference'
      });
    if (!input.referenceIds.every((id) => accepted.has(id)))
      return refuse('bad-input', 'Only accepted references of this material can build its method.', {
        referenceIds: 'Choose accepted references of this material'
      });
    const methodId = await methodOf(tx, material);
    const [{ last }] = await tx
      .select({ last: max(methodVersions.version) })
      .from(methodVersions)
      .where(eq(methodVersions.methodId, methodId));
    const version = (last ?? 0) + 1;
    const [row] = await tx
      .insert(methodVersions)
      .values({
        methodId,
        version,
        definition: input.definition,
        intendedUse: input.intendedUse,
        changeReason: input.changeReason,
        authorId: act.actor.id,
        authorName: act.actor.printedName
      })
      .returning({ id: methodVersions.id });
    await tx
      .insert(methodVersionReferences)
      .values(input.referenceIds.map((referenceId) => ({ methodVersionId: row.id, referenceId })));
    await recordTrail(tx, act, {
      action: 'method.draft',
      recordType: 'method-version',
      recordId: row.id,
      recordLabel: `Method for ${material.name} version ${version}`,
      after: {
        version,
        definition: input.definition,
        references: input.referenceIds.length,
        intendedUse: input.intendedUse
      },
      reason: input.changeReason || undefined
    });
    return done({ id: row.id, version });
  });
}

async function methodOf(tx: Transaction, material: { id: string; itemCode: string }): Promise<string> {
  await tx
    .insert(methods)
    .values({ materialId: material.id, code: `${material.itemCode}-ID` })
    .onConflictDoNothing();
  const [row] = await tx.select({ id: methods.id }).from(methods).where(eq(methods.materialId, material.id));
  return row.id;
}

export interface SigningInput {
  readonly versionId: string;
  readonly password: string;
  readonly oneTimeCode?: string;
  readonly reason: string;
}

/** Fits the draft from its references, freezes the result as a bundle and sends it to review, signed by the author. */
export async function submitMethodVersion(
  db: Database,
  act: Act,
  input: SigningInput
): Promise<Outcome<{ bundleSha256: string; cautions: readonly string[] }>> {
  if (!can(act.actor, 'method.submit'))
    return refuse('not-allowed', 'Submitting methods is for method owners.');
  const proof = await proveIdentity(db, act, {
    password: input.password,
    oneTimeCode: input.oneTimeCode,
    action: 'method.submit'
  });
  if (!proof.ok) return proof;
  return transact(db, async (tx) => {
    await tx
      .select({ id: methodVersions.id })
      .from(methodVersions)
      .where(eq(methodVersions.id, input.versionId))
      .for('update');
    const found = await getMethodVersion(tx, input.versionId);
    if (!found) return refuse('not-found', 'There is no such method version.');
    if (found.version.status !== 'draft')
      return refuse('wrong-state', `The version is ${found.version.status.replace('_', ' ')} already.`);
    if (found.version.authorId !== act.actor.id)
      return refuse('own-work', 'Only its author submits a method version.');
    const referenceIds = await tx
      .select({ id: methodVersionReferences.referenceId })
      .from(methodVersionReferences)
      .where(eq(methodVersionReferences.methodVersionId, input.versionId));
    const fitted = fitMethod(
      found.version.definition,
      await loadLabelledReferences(
        tx,
        referenceIds.map((row) => row.id)
      )
    );
    if (!fitted.ok) return refuse('bad-input', `The method could not be fitted. ${fitted.reasons.join(' ')}`);
    const bundle = new TextEncoder().encode(canonicalJson(fitted.method));
    const bundleSha256 = sha256Hex(bundle);
    const signature = await sign(tx, act, proof.value, {
      meaning: 'authored',
      recordType: 'method-version',
      recordId: input.versionId,
      record: {
        type: 'method-version',
        code: found.method.code,
        version: found.version.version,
        bundleSha256,
        intendedUse: found.version.intendedUse,
        changeReason: found.version.changeReason
      },
      reason: input.reason
    });
    await tx
      .update(methodVersions)
      .set({
        status: 'in_review',
        bundle,
        bundleSha256,
        submittedAt: signature.signedAt,
        authorSignatureId: signature.id
      })
      .where(eq(methodVersions.id, input.versionId));
    await recordTrail(tx, act, {
      action: 'method.submit',
      recordType: 'method-version',
      recordId: input.versionId,
      recordLabel: `Method ${found.method.code} version ${found.version.version}`,
      before: { status: 'draft' },
      after: { status: 'in_review', bundleSha256, signature: signature.id },
      reason: input.reason || undefined
    });
    return done({ bundleSha256, cautions: fitted.method.cautions });
  });
}

/** Makes a reviewed version effective under another person's signature; the one before it is superseded. */
export async function approveMethodVersion(
  db: Database,
  act: Act,
  input: SigningInput
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'method.approve'))
    return refuse('not-allowed', 'Approving methods is for QA approvers.');
  if (input.reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  const proof = await proveIdentity(db, act, {
    password: input.password,
    oneTimeCode: input.oneTimeCode,
    action: 'method.approve'
  });
  if (!proof.ok) return proof;
  return transact(db, async (tx) => {
    await tx
      .select({ id: methodVersions.id })
      .from(methodVersions)
      .where(eq(methodVersions.id, input.versionId))
      .for('update');
    const found = await getMethodVersion(tx, input.versionId);
    if (!found) return refuse('not-found', 'There is no such method version.');
    if (found.version.status !== 'in_review')
      return refuse(
        'wrong-state',
        `The version is ${found.version.status.replace('_', ' ')}, not in review.`
      );
    if (found.version.authorId === act.actor.id)
      return refuse('own-work', 'You wrote this version, so another person must approve it.');
    const signature = await sign(tx, act, proof.value, {
      meaning: 'approved',
      recordType: 'method-version',
      recordId: input.versionId,
      record: {
        type: 'method-version',
        code: found.method.code,
        version: found.version.version,
        bundleSha256: found.version.bundleSha256,
        intendedUse: found.version.intendedUse,
        changeReason: found.version.changeReason
      },
      reason: input.reason.trim()
    });
    await supersede(
      tx,
      act,
      found.method,
      `Superseded by version ${found.version.version}`,
      signature.signedAt
    );
    await tx
      .update(methodVersions)
      .set({
        status: 'effective',
        approverId: act.actor.id,
        approverSignatureId: signature.id,
        effectiveAt: signature.signedAt
      })
      .where(eq(methodVersions.id, input.versionId));
    await recordTrail(tx, act, {
      action: 'method.approve',
      recordType: 'method-version',
      recordId: input.versionId,
      recordLabel: `Method ${found.method.code} version ${found.version.version}`,
      before: { status: 'in_review' },
      after: { status: 'effective', signature: signature.id },
      reason: input.reason.trim()
    });
    await rebuildLibrary(tx);
    return done({ id: input.versionId });
  });
}

async function supersede(
  tx: Transaction,
  act: Act,
  method: { id: string; code: string },
  why: string,
  at: Date
): Promise<void> {
  const ended = await tx
    .update(methodVersions)
    .set({ status: 'superseded', endedAt: at, endReason: why })
    .where(and(eq(methodVersions.methodId, method.id), eq(methodVersions.status, 'effective')))
    .returning({ id: methodVersions.id, version: methodVersions.version });
  for (const row of ended) {
    await recordTrail(tx, act, {
      action: 'method.supersede',
      recordType: 'method-version',
      recordId: row.id,
      recordLabel: `Method ${method.code} version ${row.version}`,
      before: { status: 'effective' },
      after: { status: 'superseded' },
      reason: why
    });
  }
}
