import { createHash } from 'node:crypto';
import type { MethodDefinition } from '$lib/identity/method';
import type { Executor } from '$lib/server/db/client';
import {
  containers,
  deliveries,
  instruments,
  lots,
  manufacturers,
  materials,
  methodVersionReferences,
  methodVersions,
  methods,
  rawFiles,
  referenceSpectra,
  scans,
  suppliers
} from '$lib/server/db/schema';
import { sha256Hex } from '$lib/server/platform/rawFiles';
import type { Person } from './fixtures';

/** Bytes on record, as they would come from an instrument. */
export async function keepBytes(db: Executor, text: string): Promise<string> {
  const bytes = new TextEncoder().encode(text);
  const [row] = await db
    .insert(rawFiles)
    .values({
      sha256: sha256Hex(bytes),
      bytes,
      size: bytes.byteLength,
      fileName: 'made.jdx',
      mediaType: 'text/plain'
    })
    .returning({ id: rawFiles.id });
  return row.id;
}

export interface Plant {
  readonly materialId: string;
  readonly manufacturerId: string;
  readonly deliveryId: string;
  readonly instrumentId: string;
  readonly referenceId: string;
  readonly methodId: string;
}

/** One material with a reference, one delivery and one instrument: what lots and methods hang on. */
export async function makePlant(db: Executor, siteId: string, receiver: Person): Promise<Plant> {
  const one = async <Row>(rows: Promise<Row[]>) => (await rows)[0];
  const material = await one(
    db.insert(materials).values({ itemCode: '100200', name: 'Mannitol' }).returning()
  );
  const supplier = await one(
    db.insert(suppliers).values({ code: 'S1', name: 'Grey Gull Chemicals' }).returning()
  );
  const manufacturer = await one(
    db.insert(manufacturers).values({ code: 'M1', name: 'Skerry Sugars' }).returning()
  );
  const delivery = await one(
    db
      .insert(deliveries)
      .values({
        siteId,
        number: 'D-2026-0001',
        deliveryNote: 'N 1',
        supplierId: supplier.id,
        arrivedOn: '2026-01-05',
        receivedBy: receiver.id,
        receivedByName: receiver.act.actor.printedName
      })
      .returning()
  );
  const instrument = await one(
    db
      .insert(instruments)
      .values({
        siteId,
        name: 'RM-1',
        serial: 'A-1',
        excitationNm: 785,
        rangeFromCm1: 200,
        rangeToCm1: 2000,
        resolutionCm1: 8,
        location: 'Dock B'
      })
      .returning()
  );
  const reference = await one(
    db
      .insert(referenceSpectra)
      .values({
        number: 'R-0001',
        materialId: material.id,
        rawFileId: await keepBytes(db, 'reference'),
        kind: 'reference_standard',
        sourceLot: 'RS 1',
        excitationNm: '785',
        status: 'accepted'
      })
      .returning()
  );
  const method = await one(
    db.insert(methods).values({ materialId: material.id, code: '100200-ID' }).returning()
  );
  return {
    materialId: material.id,
    manufacturerId: manufacturer.id,
    deliveryId: delivery.id,
    instrumentId: instrument.id,
    referenceId: reference.id,
    methodId: method.id
  };
}

let lotCount = 0;

/** A lot in quarantine with its containers. */
export async function makeLot(db: Executor, plant: Plant, containerCount = 2) {
  lotCount += 1;
  const { deliveryId, materialId, manufacturerId } = plant;
  const [lot] = await db
    .insert(lots)
    .values({
      lotNumber: `L-TEST-${lotCount}`,
      deliveryId,
      materialId,
      manufacturerId,
      manufacturerBatch: `B${lotCount}`,
      containerCount
    })
    .returning();
  const rows = await db
    .insert(containers)
    .values(
      Array.from({ length: containerCount }, (_, index) => ({
        lotId: lot.id,
        number: index + 1,
        barcode: `${lot.lotNumber}/${index + 1}`
      }))
    )
    .returning();
  return { ...lot, containers: rows };
}

/** A draft method version on the plant's reference. */
export async function makeDraft(db: Executor, plant: Plant, author: Person, version = 1) {
  const [row] = await db
    .insert(methodVersions)
    .values({
      methodId: plant.methodId,
      version,
      definition: {} as MethodDefinition,
      authorId: author.id,
      authorName: author.act.actor.printedName
    })
    .returning();
  await db
    .insert(methodVersionReferences)
    .values({ methodVersionId: row.id, referenceId: plant.referenceId });
  return row;
}

/** The bundle of a method version: any bytes, with their true hash. */
export const someBundle = (text = 'bundle') => {
  const bundle = new TextEncoder().encode(text);
  return { bundle, bundleSha256: createHash('sha256').update(bundle).digest('hex') };
};

/** A scan of a container, on record without its decision. */
export async function makeScan(
  db: Executor,
  plant: Plant,
  container: { id: string; lotId: string },
  operator: Person,
  methodVersionId: string,
  attempt = 1
) {
  const [row] = await db
    .insert(scans)
    .values({
      id: crypto.randomUUID(),
      lotId: container.lotId,
      containerId: container.id,
      attempt,
      instrumentId: plant.instrumentId,
      methodVersionId,
      rawFileId: await keepBytes(db, `scan ${attempt} of ${container.id}`),
      repeatReason: attempt > 1 ? 'window wiped' : null,
      operatorId: operator.id,
      operatorName: operator.act.actor.printedName
    })
    .returning();
  return row;
}
