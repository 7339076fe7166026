import type { ContainerStatus } from '../../src/lib/domain/containers';
import { registerDelivery } from '../../src/lib/server/commands/deliveries';
import type { Database } from '../../src/lib/server/db/client';
import { serverNow, siteToday } from '../../src/lib/server/queries/clock';
import { DELIVERIES } from './deliveries';
import type { Plant } from './makePlant';
import { must } from './must';
import { playLot } from './playLot';
import { SITE, sourceOf } from './scenario';

/** A lot of the demo with what a visitor needs to try it: where it is and what its containers' codes are. */
export interface MadeLot {
  readonly itemCode: string;
  readonly lotNumber: string;
  readonly batch: string;
  readonly containers: readonly {
    readonly number: number;
    readonly barcode: string;
    readonly status: ContainerStatus;
  }[];
}

/** The deliveries of the demo, each lot played to where it stands. */
export async function makeDeliveries(db: Database, plant: Plant): Promise<MadeLot[]> {
  const made: MadeLot[] = [];
  const now = await serverNow(db);
  const expires = `${now.getUTCFullYear() + 2}-06-30`;
  for (const delivery of DELIVERIES) {
    const registered = must(
      await registerDelivery(db, plant.acts['o.reis'], {
        deliveryNote: delivery.note,
        supplierId: plant.supplierIds[delivery.supplier],
        carrier: delivery.carrier,
        condition: delivery.condition,
        arrivedOn: await siteToday(db, SITE.timeZone),
        lots: delivery.lots.map((lot) => ({
          materialId: plant.materialIds[lot.itemCode],
          manufacturerId: plant.manufacturerIds[sourceOf(lot.itemCode).manufacturer],
          manufacturerBatch: lot.batch,
          expiresOn: expires,
          retestOn: null,
          containerCount: lot.containers,
          packaging: lot.packaging,
          samplingPlan: 'every_container' as const,
          samplingReason: ''
        }))
      })
    );
    for (const [i, lot] of delivery.lots.entries()) {
      const detail = await playLot(db, plant, registered.lots[i].id, lot);
      made.push({
        itemCode: lot.itemCode,
        batch: lot.batch,
        lotNumber: detail.lot.lotNumber,
        containers: detail.containers.map(({ number, barcode, status }) => ({ number, barcode, status }))
      });
    }
  }
  return made;
}
