import { randomUUID } from 'node:crypto';
import { addDeviationNote, concludeDeviation } from '../../src/lib/server/commands/deviations';
import {
  attachPaper,
  disposeLot,
  recordLimitTest,
  setContainersAside
} from '../../src/lib/server/commands/lots';
import { decideRepeat, requestRepeat } from '../../src/lib/server/commands/repeats';
import { recordScan } from '../../src/lib/server/commands/scans';
import type { Database } from '../../src/lib/server/db/client';
import { dispositionPreview } from '../../src/lib/server/queries/dispositionRecord';
import { getLot, type LotDetail } from '../../src/lib/server/queries/lots';
import type { DemoLot, DemoScan, DemoStep } from './deliveries';
import { demoPaper } from './demoPaper';
import { drumFile } from './drumFile';
import type { Plant } from './makePlant';
import { must } from './must';

const OPERATOR = 'o.reis';
const APPROVER = 'q.sousa';

/** Plays what happens to one lot of the demo, each act by someone whose role it is. */
export async function playLot(db: Database, plant: Plant, lotId: string, lot: DemoLot): Promise<LotDetail> {
  const repeats = new Map<number, string>();
  if (lot.paper) {
    const file = demoPaper(`${lot.itemCode} ${lot.batch}`);
    must(await attachPaper(db, plant.acts[OPERATOR], lotId, 'certificate_of_analysis', 'Demo paper', file));
  }
  for (const step of lot.steps) await play(db, plant, await lotNow(db, plant, lotId), lot, step, repeats);
  return lotNow(db, plant, lotId);
}

async function lotNow(db: Database, plant: Plant, lotId: string): Promise<LotDetail> {
  const detail = await getLot(db, plant.siteId, lotId);
  if (!detail) throw new Error('a lot of the demo vanished');
  return detail;
}

/** @param repeats requests for a repeat so far, by container number */
async function play(
  db: Database,
  plant: Plant,
  detail: LotDetail,
  lot: DemoLot,
  step: DemoStep,
  repeats: Map<number, string>
): Promise<void> {
  const { acts } = plant;
  const asApprover = { password: plant.passwords[APPROVER] };
  switch (step.do) {
    case 'scan':
      return playScan(db, plant, detail, lot, step);
    case 'set-aside': {
      const { id } = containerOf(detail, step.container);
      must(await setContainersAside(db, acts[OPERATOR], detail.lot.id, [id], step.reason));
      return;
    }
    case 'ask-repeat': {
      const scanId = lastScanOf(detail, step.container);
      const { id } = must(await requestRepeat(db, acts[OPERATOR], scanId, step.cause, step.reason));
      repeats.set(step.container, id);
      return;
    }
    case 'decide-repeat': {
      const requestId = repeats.get(step.container) ?? '';
      const { outcome, reason } = step;
      must(await decideRepeat(db, acts[APPROVER], { requestId, outcome, reason, ...asApprover }));
      return;
    }
    case 'note':
      must(await addDeviationNote(db, acts['m.faria'], deviationOf(detail, step.container), step.note));
      return;
    case 'conclude': {
      const id = deviationOf(detail, step.container);
      const { causeCategory, cause, impact, action } = step;
      must(
        await concludeDeviation(db, acts[APPROVER], {
          id,
          causeCategory,
          cause,
          impact,
          action,
          ...asApprover
        })
      );
      return;
    }
    case 'limit-test':
      must(await recordLimitTest(db, acts[APPROVER], detail.lot.id, 'complies', step.report));
      return;
    case 'release':
    case 'reject': {
      const { sha256: seenSha256 } = await dispositionPreview(detail, step.do);
      const origin = process.env.ORIGIN ?? 'http://127.0.0.1:4180';
      const decision = { lotId: detail.lot.id, outcome: step.do, reason: step.reason, seenSha256, origin };
      must(await disposeLot(db, acts[APPROVER], { ...decision, ...asApprover }));
    }
  }
}

async function playScan(db: Database, plant: Plant, detail: LotDetail, lot: DemoLot, scan: DemoScan) {
  const { barcode } = containerOf(detail, scan.container);
  const input = {
    scanId: randomUUID(),
    barcode,
    instrumentId: plant.instrumentIds[scan.instrument ?? 'RM-1'],
    repeatReason: scan.repeatReason ?? '',
    sentLate: false,
    readOptions: {}
  };
  const file = drumFile(lot.itemCode, lot.batch, scan, `${barcode}.csv`);
  must(await recordScan(db, plant.acts[OPERATOR], input, file));
}

function containerOf(detail: LotDetail, number: number) {
  const found = detail.containers.find((container) => container.number === number);
  if (!found) throw new Error(`lot ${detail.lot.lotNumber} has no container ${number}`);
  return found;
}

function lastScanOf(detail: LotDetail, number: number): string {
  const { id } = containerOf(detail, number);
  const own = detail.scans.filter((scan) => scan.containerId === id);
  const [last] = own.sort((a, b) => b.attempt - a.attempt);
  if (!last) throw new Error(`container ${number} of lot ${detail.lot.lotNumber} was not scanned`);
  return last.id;
}

function deviationOf(detail: LotDetail, number: number): string {
  const { id } = containerOf(detail, number);
  const found = detail.deviations.find((deviation) => deviation.containerId === id);
  if (!found) throw new Error(`container ${number} of lot ${detail.lot.lotNumber} has no deviation`);
  return found.id;
}
