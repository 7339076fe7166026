/** One lot as typed so far; `key` keeps rows apart while they are added and removed. */
export interface TypedLot {
  readonly key: string;
  materialId: string;
  manufacturerId: string;
  manufacturerBatch: string;
  expiresOn: string;
  retestOn: string;
  containerCount: string;
  packaging: string;
}

export interface TypedDelivery {
  deliveryNote: string;
  supplierId: string;
  carrier: string;
  arrivedOn: string;
  condition: string;
  lots: TypedLot[];
}

let count = 0;

/** A lot nothing has been typed into. */
export const emptyLot = (): TypedLot => ({
  key: `lot-${(count += 1)}`,
  materialId: '',
  manufacturerId: '',
  manufacturerBatch: '',
  expiresOn: '',
  retestOn: '',
  containerCount: '',
  packaging: 'drum'
});

const text = (value: unknown): string => (typeof value === 'string' ? value : '');

/** What a refused form had been given, right and wrong, so that nothing is typed twice. */
export function typedDelivery(values: Record<string, unknown> | undefined): TypedDelivery {
  const lots = Array.isArray(values?.lots) ? (values.lots as Record<string, unknown>[]) : [];
  return {
    deliveryNote: text(values?.deliveryNote),
    supplierId: text(values?.supplierId),
    carrier: text(values?.carrier),
    arrivedOn: text(values?.arrivedOn),
    condition: text(values?.condition),
    lots:
      lots.length === 0
        ? [emptyLot()]
        : lots.map((lot) => ({
            ...emptyLot(),
            materialId: text(lot.materialId),
            manufacturerId: text(lot.manufacturerId),
            manufacturerBatch: text(lot.manufacturerBatch),
            expiresOn: text(lot.expiresOn),
            retestOn: text(lot.retestOn),
            containerCount: text(lot.containerCount),
            packaging: text(lot.packaging)
          }))
  };
}
