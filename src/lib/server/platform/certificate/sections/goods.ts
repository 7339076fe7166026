import type { CertificateData } from '../../../../domain/certificate';
import { facts, heading, type Page } from '../page';

/** What was tested: material, lot, where it came from. */
export function goodsSection(page: Page, data: CertificateData): void {
  heading(page, 'Material and lot');
  const { lot, material } = data;
  facts(page, [
    ['Material', `${material.name} (${material.itemCode})`],
    ['Lot', lot.lotNumber],
    ['CAS number', material.casNumber ?? 'not stated'],
    ['Grade', material.grade || 'not stated'],
    ['Manufacturer', lot.manufacturer],
    ["Manufacturer's batch", lot.manufacturerBatch],
    ['Supplier', lot.supplier],
    ['Delivery', `${lot.delivery}, note ${lot.deliveryNote}`],
    ['Arrived', lot.arrivedOn],
    ['Expires', lot.expiresOn ?? 'not stated'],
    ['Containers', String(lot.containerCount)],
    ['Sampling plan', lot.samplingPlan],
    ['Glycol limit test', data.highRisk ? (data.limitTest ?? 'missing') : 'not asked for this material'],
    ['Retest', lot.retestOn ?? 'not stated']
  ]);
}
