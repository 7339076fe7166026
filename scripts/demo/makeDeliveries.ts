import { randomUUID } from 'node:crypto';
import { registerDelivery } from '../../src/lib/server/commands/deliveries';
import { attachPaper, disposeLot } from '../../src/lib/server/commands/lots';
import { recordScan } from '../../src/lib/server/commands/scans';
import type { Database } from '../../src/lib/server/db/client';
import { serverNow, siteToday } from '../../src/lib/server/queries/clock';
import { dispositionPreview } from '../../src/lib/server/queries/dispositionRecord';
import { getLot } from '../../src/lib/server/queries/lots';
import { textFile, type Plant } from './makePlant';
import { readLiner, readMaterials } from './materials';
import { must } from './must';
import { demoPaper } from './demoPaper';
import { DELIVERIES, INSTRUMENTS, SITE, sourceOf, type DemoLot, type DemoScan } from './scenario';
import { synthesise, toDelimitedText } from './synthesise';

/** A lot of the demo with what a visitor needs to try it: where it is and what its containers' codes are. */
export interface MadeLot {
  readonly itemCode: string;
  readonly lotNumber: string;
  readonly barcodes: readonly string[];
  readonly scanned: readonly number[];
}

/** Deliveries with their lots, scans, papers and one released lot. */
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
    for (const [i, lot] of delivery.lots.entries())
      made.push(await playLot(db, plant, registered.lots[i].id, lot));
  }
  return made;
}

async function playLot(db: Database, plant: Plant, lotId: string, lot: DemoLot): Promise<MadeLot> {
  const operator = plant.acts['o.reis'];
  if (lot.paper)
    must(
      await attachPaper(
        db,
        operator,
        lotId,
        'certificate_of_analysis',
        'Demo paper',
        demoPaper(`${lot.itemCode} ${lot.batch}`)
      )
    );
  const detail = await getLot(db, plant.siteId, lotId);
  if (!detail) throw new Error('a lot vanished');
  for (const scan of lot.scans)
    await playScan(db, plant, detail.containers[scan.container - 1].barcode, lot, scan);
  if (lot.release) {
    const now = await getLot(db, plant.siteId, lotId);
    if (!now) throw new Error('a lot vanished');
    const { sha256 } = await dispositionPreview(now, 'release');
    must(
      await disposeLot(db, plant.acts['q.sousa'], {
        lotId,
        outcome: 'release',
        reason: lot.release,
        password: plant.passwords['q.sousa'],
        seenSha256: sha256,
        origin: process.env.ORIGIN ?? 'http://127.0.0.1:4180'
      })
    );
  }
  return {
    itemCode: lot.itemCode,
    lotNumber: detail.lot.lotNumber,
    barcodes: detail.containers.map((row) => row.barcode),
    scanned: lot.scans.map((scan) => scan.container)
  };
}

/** What RM-1 sees in a drum: the demo's own material unless something else is in it. */
export function drumFile(itemCode: string, batch: string, scan: DemoScan, fileName: string) {
  const truth = readMaterials().find((material) => material.itemCode === (scan.truth ?? itemCode));
  if (!truth) throw new Error(`the demo has no material ${itemCode}`);
  const [instrument] = INSTRUMENTS;
  const lotSeed = `${itemCode} ${batch}`;
  const spectrum = synthesise(truth.bands, instrument, {
    lotSeed,
    scanSeed: `${lotSeed} drum ${scan.container}`,
    fluorescence: scan.fluorescence ?? truth.fluorescence,
    liner: readLiner(),
    linerShare: scan.linerShare ?? 0.02,
    brightness: scan.brightness ?? 20_000
  });
  return textFile(fileName, toDelimitedText(spectrum, instrument, `container ${scan.container}`));
}

async function playScan(
  db: Database,
  plant: Plant,
  barcode: string,
  lot: DemoLot,
  scan: DemoScan
): Promise<void> {
  must(
    await recordScan(
      db,
      plant.acts['o.reis'],
      {
        scanId: randomUUID(),
        barcode,
        instrumentId: plant.instrumentIds['RM-1'],
        repeatReason: scan.repeatReason ?? '',
        sentLate: false,
        readOptions: {}
      },
      drumFile(lot.itemCode, lot.batch, scan, `${barcode}.csv`)
    )
  );
}
