export const DELIVERY_STATUSES = ['expected', 'arrived', 'landed', 'closed', 'refused'] as const;
export type DeliveryStatus = (typeof DELIVERY_STATUSES)[number];

export const DELIVERY_STATUS_NAMES: Readonly<Record<DeliveryStatus, string>> = {
  expected: 'Expected',
  arrived: 'Arrived',
  landed: 'Landed',
  closed: 'Closed',
  refused: 'Refused'
};
