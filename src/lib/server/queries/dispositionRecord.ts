import { canonicalJson } from '../../identity/canonicalJson';
import type { LotDetail } from './lots';

/** What is signed at a disposition: the lot with every attempt, as canonical JSON. */
export function dispositionRecord(detail: LotDetail, outcome: string) {
  return {
    type: 'lot-disposition',
    outcome,
    lotNumber: detail.lot.lotNumber,
    material: { itemCode: detail.material.itemCode, name: detail.material.name },
    manufacturer: detail.manufacturer.name,
    manufacturerBatch: detail.lot.manufacturerBatch,
    supplier: detail.supplier.name,
    delivery: detail.delivery.number,
    expiresOn: detail.lot.expiresOn,
    methodVersionId: detail.lot.methodVersionId,
    containers: detail.containers.map((container) => ({
      number: container.number,
      barcode: container.barcode,
      status: container.status,
      scans: detail.scans
        .filter((scan) => scan.containerId === container.id)
        .map((scan) => ({
          id: scan.id,
          attempt: scan.attempt,
          verdict: scan.verdict,
          correlation: scan.correlation,
          hotellingT2: scan.hotellingT2,
          qResidual: scan.qResidual
        }))
    })),
    papers: detail.papers.map((paper) => ({
      kind: paper.kind,
      fileName: paper.fileName,
      sha256: paper.sha256
    })),
    deviations: detail.deviations.map((deviation) => ({ number: deviation.number, phase: deviation.phase })),
    limitTest: detail.limitTests[0]?.outcome ?? null
  };
}

/** SHA-256 and record of what a signer of this lot would sign now. */
export async function dispositionPreview(
  detail: LotDetail,
  outcome: string
): Promise<{ record: object; sha256: string }> {
  const record = dispositionRecord(detail, outcome);
  const digest = await crypto.subtle.digest('SHA-256', new TextEncoder().encode(canonicalJson(record)));
  return { record, sha256: Buffer.from(digest).toString('hex') };
}
