import { asc, eq, sql } from 'drizzle-orm';
import type { Executor } from '../db/client';
import {
  approvedSources,
  manufacturers,
  materials,
  methodVersions,
  methods,
  referenceSpectra,
  suppliers
} from '../db/schema';

/** Qualified by hand: in a query of one table the builder writes bare column names, which a subquery would take as its own. */
const ownId = sql.raw('"materials"."id"');

/** Every material with how many references it has and its effective method version. */
export async function listMaterialOverview(db: Executor) {
  return db
    .select({
      id: materials.id,
      itemCode: materials.itemCode,
      name: materials.name,
      casNumber: materials.casNumber,
      grade: materials.grade,
      ramanSuitability: materials.ramanSuitability,
      dark: materials.dark,
      energetic: materials.energetic,
      lightSensitive: materials.lightSensitive,
      degEgHighRisk: materials.degEgHighRisk,
      status: materials.status,
      references: sql<number>`(select count(*)::int from ${referenceSpectra} r where r.material_id = ${ownId} and r.status = 'accepted')`,
      effectiveVersion: sql<
        number | null
      >`(select v.version from ${methodVersions} v join ${methods} m on m.id = v.method_id where m.material_id = ${ownId} and v.status = 'effective')`
    })
    .from(materials)
    .orderBy(asc(materials.name));
}

/** Approved sources of a material. */
export async function listApprovedSources(db: Executor, materialId: string) {
  return db
    .select({
      id: approvedSources.id,
      supplier: suppliers.name,
      manufacturer: manufacturers.name,
      withdrawnAt: approvedSources.withdrawnAt
    })
    .from(approvedSources)
    .innerJoin(suppliers, eq(suppliers.id, approvedSources.supplierId))
    .innerJoin(manufacturers, eq(manufacturers.id, approvedSources.manufacturerId))
    .where(eq(approvedSources.materialId, materialId))
    .orderBy(asc(suppliers.name), asc(manufacturers.name));
}

/** Versions of a material's method, newest first. */
export async function listVersionsOfMaterial(db: Executor, materialId: string) {
  return db
    .select({
      id: methodVersions.id,
      code: methods.code,
      version: methodVersions.version,
      status: methodVersions.status,
      authorName: methodVersions.authorName,
      effectiveAt: methodVersions.effectiveAt
    })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .where(eq(methods.materialId, materialId))
    .orderBy(sql`${methodVersions.version} desc`);
}
