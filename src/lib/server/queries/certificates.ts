import { and, desc, eq } from 'drizzle-orm';
import type { Executor } from '../db/client';
import { certificates, deliveries, lots, materials } from '../db/schema';

const listed = {
  id: certificates.id,
  number: certificates.number,
  lotId: lots.id,
  lotNumber: lots.lotNumber,
  lotStatus: lots.status,
  material: materials.name,
  verificationCode: certificates.verificationCode,
  sha256: certificates.sha256,
  issuedAt: certificates.issuedAt
};

/** Certificates of the site, newest first. */
export async function listCertificates(db: Executor, siteId: string) {
  return db
    .select(listed)
    .from(certificates)
    .innerJoin(lots, eq(lots.id, certificates.lotId))
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(eq(deliveries.siteId, siteId))
    .orderBy(desc(certificates.issuedAt));
}

/** A certificate with its PDF, when it is of the site. */
export async function getCertificate(db: Executor, siteId: string, id: string) {
  const [row] = await db
    .select({ ...listed, pdf: certificates.pdf })
    .from(certificates)
    .innerJoin(lots, eq(lots.id, certificates.lotId))
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(and(eq(certificates.id, id), eq(deliveries.siteId, siteId)));
  return row ?? null;
}

/** What the public verification page may say: that it is genuine, and nothing of its content. */
export async function findCertificateByCode(db: Executor, code: string) {
  const [row] = await db
    .select({ number: certificates.number, issuedAt: certificates.issuedAt, sha256: certificates.sha256 })
    .from(certificates)
    .where(eq(certificates.verificationCode, code));
  return row ?? null;
}
