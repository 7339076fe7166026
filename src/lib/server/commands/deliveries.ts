import { and, eq, inArray, isNull } from 'drizzle-orm';
import { containerBarcode } from '../../domain/barcodes';
import { dateFaults, type NewDelivery } from '../../domain/deliveries';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database, Transaction } from '../db/client';
import { approvedSources, containers, deliveries, lots, materials, sites } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { recordTrail } from '../platform/trail';
import { siteToday } from '../queries/clock';
import { nextNumber } from '../platform/numberSeries';

export interface RegisteredDelivery {
  readonly id: string;
  readonly number: string;
  readonly lots: readonly { readonly id: string; readonly lotNumber: string }[];
}

/**
 * Registers a delivery with its lots and containers, all in quarantine. Refuses unknown or unapproved
 * sources, expired lots and a delivery note already on record; nothing is stored then.
 */
export async function registerDelivery(
  db: Database,
  act: Act,
  input: NewDelivery
): Promise<Outcome<RegisteredDelivery>> {
  if (!can(act.actor, 'delivery.register')) {
    return refuse('not-allowed', 'Registering a delivery is for operators and approvers.');
  }
  return transact(db, async (tx) => {
    const faults = {
      ...dateFaults(input, await siteToday(tx, act.actor.timeZone)),
      ...(await sourceFaults(tx, input)),
      ...(await samplingFaults(tx, act, input))
    };
    const [first] = Object.values(faults);
    if (first !== undefined) return refuse('bad-input', first, faults);

    const number = await nextNumber(tx, 'D');
    const [delivery] = await tx
      .insert(deliveries)
      .values({
        number,
        siteId: act.actor.siteId,
        deliveryNote: input.deliveryNote,
        supplierId: input.supplierId,
        carrier: input.carrier,
        condition: input.condition,
        arrivedOn: input.arrivedOn,
        receivedBy: act.actor.id,
        receivedByName: act.actor.printedName
      })
      .onConflictDoNothing({ target: [deliveries.supplierId, deliveries.deliveryNote] })
      .returning({ id: deliveries.id });
    if (!delivery) {
      const sentence = `Delivery note ${input.deliveryNote} of this supplier is on record already`;
      return refuse('already-exists', `${sentence}.`, { deliveryNote: sentence });
    }
    await recordTrail(tx, act, {
      action: 'delivery.register',
      recordType: 'delivery',
      recordId: delivery.id,
      recordLabel: `Delivery ${number}`,
      after: { number, ...input, lots: input.lots.length }
    });
    const registered = [];
    for (const lot of input.lots) registered.push(await registerLot(tx, act, delivery.id, lot));
    return done({ id: delivery.id, number, lots: registered });
  });
}

async function registerLot(
  tx: Transaction,
  act: Act,
  deliveryId: string,
  input: NewDelivery['lots'][number]
) {
  const lotNumber = await nextNumber(tx, 'L');
  const [lot] = await tx
    .insert(lots)
    .values({
      lotNumber,
      deliveryId,
      materialId: input.materialId,
      manufacturerId: input.manufacturerId,
      manufacturerBatch: input.manufacturerBatch,
      expiresOn: input.expiresOn,
      retestOn: input.retestOn,
      containerCount: input.containerCount,
      samplingPlan: input.samplingPlan,
      samplingReason: input.samplingReason || null
    })
    .returning({ id: lots.id });
  await tx.insert(containers).values(
    Array.from({ length: input.containerCount }, (_, index) => ({
      lotId: lot.id,
      number: index + 1,
      barcode: containerBarcode(lotNumber, index + 1),
      packaging: input.packaging
    }))
  );
  await recordTrail(tx, act, {
    action: 'lot.register',
    recordType: 'lot',
    recordId: lot.id,
    recordLabel: `Lot ${lotNumber}`,
    lotId: lot.id,
    after: { lotNumber, ...input, status: 'quarantine' }
  });
  return { id: lot.id, lotNumber };
}

async function sourceFaults(tx: Transaction, input: NewDelivery): Promise<Record<string, string>> {
  const materialIds = [...new Set(input.lots.map((lot) => lot.materialId))];
  const known = await tx
    .select({ id: materials.id, name: materials.name })
    .from(materials)
    .where(and(inArray(materials.id, materialIds), eq(materials.status, 'active')));
  const sources = await tx
    .select()
    .from(approvedSources)
    .where(
      and(
        inArray(approvedSources.materialId, materialIds),
        eq(approvedSources.supplierId, input.supplierId),
        isNull(approvedSources.withdrawnAt)
      )
    );
  const faults: Record<string, string> = {};
  input.lots.forEach((lot, index) => {
    const material = known.find((row) => row.id === lot.materialId);
    if (!material) faults[`lots.${index}.materialId`] = 'Choose a material from the list';
    else if (
      !sources.some((row) => row.materialId === lot.materialId && row.manufacturerId === lot.manufacturerId)
    ) {
      faults[`lots.${index}.manufacturerId`] =
        `This manufacturer through this supplier is not an approved source of ${material.name}: set the goods aside and call QA`;
    }
  });
  return faults;
}

async function samplingFaults(
  tx: Transaction,
  act: Act,
  input: NewDelivery
): Promise<Record<string, string>> {
  const [site] = await tx.select().from(sites).where(eq(sites.id, act.actor.siteId));
  const faults: Record<string, string> = {};
  input.lots.forEach((lot, index) => {
    if (lot.samplingPlan === 'every_container') return;
    if (!site.reducedSamplingAllowed) {
      faults[`lots.${index}.samplingPlan`] = 'This site tests every container; no reduced plan is approved';
    }
  });
  return faults;
}
