import { z } from 'zod';
import { calendarDate } from './calendarDate';
import { SAMPLING_PLANS } from './lots';

export const DELIVERY_STATUSES = ['expected', 'arrived', 'landed', 'closed', 'refused'] as const;
export type DeliveryStatus = (typeof DELIVERY_STATUSES)[number];

export const DELIVERY_STATUS_NAMES: Readonly<Record<DeliveryStatus, string>> = {
  expected: 'Expected',
  arrived: 'Arrived',
  landed: 'Landed',
  closed: 'Closed',
  refused: 'Refused'
};

/** Most containers one lot may have; the database says the same. */
export const MAX_CONTAINERS = 2000;

const choice = (what: string) => z.string().uuid(`Choose the ${what}`);
const line = (what: string, max = 120) =>
  z.string().trim().min(1, `Enter the ${what}`).max(max, `The ${what} must be ${max} characters or fewer`);
const optionalDate = z.union([z.literal(''), calendarDate]).transform((text) => (text === '' ? null : text));

/** One lot of a delivery as the intake form sends it. */
export const newLotSchema = z.strictObject({
  materialId: choice('material'),
  manufacturerId: choice('manufacturer'),
  manufacturerBatch: line("manufacturer's batch", 40),
  expiresOn: optionalDate,
  retestOn: optionalDate,
  containerCount: z.coerce
    .number('Enter the number of containers as a whole number')
    .int('Enter the number of containers as a whole number')
    .min(1, 'A lot has at least 1 container')
    .max(MAX_CONTAINERS, `A lot has at most ${MAX_CONTAINERS} containers; split it into several lots`),
  packaging: line('packaging', 40),
  samplingPlan: z.enum(SAMPLING_PLANS).default('every_container'),
  samplingReason: z.string().trim().max(1000).default('')
});

/** A delivery with its lots as the intake form sends it. */
export const newDeliverySchema = z.strictObject({
  deliveryNote: line('delivery note number', 60),
  supplierId: choice('supplier'),
  carrier: z.string().trim().max(120).default(''),
  arrivedOn: calendarDate,
  condition: z.string().trim().max(1000).default(''),
  lots: z
    .array(newLotSchema)
    .min(1, 'A delivery has at least one lot')
    .max(20, 'Register at most 20 lots at a time')
});

export type NewDelivery = z.output<typeof newDeliverySchema>;

/**
 * What the calendar says against a delivery, as field to sentence: an arrival in the future, or a lot that
 * had expired before it came.
 * @param today the site's date, `YYYY-MM-DD`
 */
export function dateFaults(delivery: NewDelivery, today: string): Record<string, string> {
  const faults: Record<string, string> = {};
  if (delivery.arrivedOn > today) faults.arrivedOn = 'The arrival date is in the future';
  delivery.lots.forEach((lot, index) => {
    if (lot.expiresOn !== null && lot.expiresOn < today) {
      faults[`lots.${index}.expiresOn`] = 'This lot has expired: set the goods aside and call QA';
    }
    if (lot.retestOn !== null && lot.retestOn < today) {
      faults[`lots.${index}.retestOn`] = 'The retest date has passed: set the goods aside and call QA';
    }
  });
  return faults;
}
