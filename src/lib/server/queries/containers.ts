import { asc, eq } from 'drizzle-orm';
import type { Executor, Transaction } from '../db/client';
import { containers, lots, materials } from '../db/schema';

/** The container with its lot and material, locked against a second scan at the same moment. */
export async function lockContainerByBarcode(tx: Transaction, barcode: string) {
  const [row] = await tx
    .select({ container: containers, lot: lots, material: materials })
    .from(containers)
    .innerJoin(lots, eq(lots.id, containers.lotId))
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .where(eq(containers.barcode, barcode))
    .for('update', { of: containers });
  return row ?? null;
}

/** The container with its lot and material, for showing. */
export async function findContainer(db: Executor, barcode: string) {
  const [row] = await db
    .select({ container: containers, lot: lots, material: materials })
    .from(containers)
    .innerJoin(lots, eq(lots.id, containers.lotId))
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .where(eq(containers.barcode, barcode));
  return row ?? null;
}

export async function listContainers(db: Executor, lotId: string) {
  return db.select().from(containers).where(eq(containers.lotId, lotId)).orderBy(asc(containers.number));
}
