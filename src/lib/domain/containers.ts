/** States of a container. `set_aside` waits for a person: after a fail, or a measurement limit reached. */
export const CONTAINER_STATUSES = ['awaiting', 'pass', 'fail', 'inconclusive', 'set_aside'] as const;
export type ContainerStatus = (typeof CONTAINER_STATUSES)[number];

export const CONTAINER_STATUS_NAMES: Readonly<Record<ContainerStatus, string>> = {
  awaiting: 'Awaiting scan',
  pass: 'Pass',
  fail: 'Fail',
  inconclusive: 'Cannot tell',
  set_aside: 'Set aside'
};
