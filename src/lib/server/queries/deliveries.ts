import { and, asc, desc, eq, isNull, sql } from 'drizzle-orm';
import type { Executor } from '../db/client';
import { approvedSources, deliveries, lots, manufacturers, materials, suppliers } from '../db/schema';

/** Deliveries of the site, newest first. */
export async function listDeliveries(db: Executor, siteId: string) {
  return db
    .select({
      id: deliveries.id,
      number: deliveries.number,
      deliveryNote: deliveries.deliveryNote,
      supplier: suppliers.name,
      status: deliveries.status,
      arrivedOn: deliveries.arrivedOn,
      receivedByName: deliveries.receivedByName,
      receivedAt: deliveries.receivedAt,
      lotCount: sql<number>`(select count(*)::int from ${lots} l where l.delivery_id = ${deliveries.id})`
    })
    .from(deliveries)
    .innerJoin(suppliers, eq(suppliers.id, deliveries.supplierId))
    .where(eq(deliveries.siteId, siteId))
    .orderBy(desc(deliveries.receivedAt));
}

export async function getDelivery(db: Executor, siteId: string, id: string) {
  const [row] = await db
    .select({ delivery: deliveries, supplier: suppliers })
    .from(deliveries)
    .innerJoin(suppliers, eq(suppliers.id, deliveries.supplierId))
    .where(and(eq(deliveries.id, id), eq(deliveries.siteId, siteId)));
  return row ?? null;
}

/** What the intake form offers: materials, suppliers, manufacturers and which of them go together. */
export async function getIntakeChoices(db: Executor) {
  return {
    materials: await db
      .select({
        id: materials.id,
        itemCode: materials.itemCode,
        name: materials.name,
        packaging: materials.packaging,
        ramanSuitability: materials.ramanSuitability
      })
      .from(materials)
      .where(eq(materials.status, 'active'))
      .orderBy(asc(materials.name)),
    suppliers: await db
      .select({ id: suppliers.id, name: suppliers.name })
      .from(suppliers)
      .orderBy(asc(suppliers.name)),
    manufacturers: await db
      .select({ id: manufacturers.id, name: manufacturers.name })
      .from(manufacturers)
      .orderBy(asc(manufacturers.name)),
    sources: await db
      .select({
        materialId: approvedSources.materialId,
        supplierId: approvedSources.supplierId,
        manufacturerId: approvedSources.manufacturerId
      })
      .from(approvedSources)
      .where(isNull(approvedSources.withdrawnAt))
  };
}
