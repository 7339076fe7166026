import { createHash } from 'node:crypto';
import type { CertificateData } from '../../../domain/certificate';
import type { Transaction } from '../../db/client';
import { certificates } from '../../db/schema';
import { renderCertificate } from './render';

/** Renders a certificate once and stores it with its hash, in the disposition's transaction. */
export async function issueCertificate(
  tx: Transaction,
  data: CertificateData,
  ids: { readonly lotId: string; readonly dispositionId: string }
): Promise<{ id: string; number: string; sha256: string }> {
  const pdf = await renderCertificate(data);
  const sha256 = createHash('sha256').update(pdf).digest('hex');
  const [row] = await tx
    .insert(certificates)
    .values({
      ...ids,
      number: data.number,
      verificationCode: data.verificationCode,
      pdf,
      sha256,
      treeSize: data.treeHead?.size ?? 0,
      treeRoot: data.treeHead?.rootHash ?? ''
    })
    .returning({ id: certificates.id });
  return { id: row.id, number: data.number, sha256 };
}
