import { can, type Action, type Actor } from './roles';

/** One room of the product as the rail shows it. */
export interface Room {
  readonly href: string;
  readonly title: string;
  readonly subtitle: string;
  readonly icon: string;
  readonly action: Action;
}

export const ROOMS: readonly Room[] = [
  { href: '/', title: 'Tally', subtitle: 'work waiting', icon: 'ledger', action: 'tally.read' },
  {
    href: '/deliveries',
    title: 'Deliveries',
    subtitle: 'goods received',
    icon: 'crate',
    action: 'delivery.read'
  },
  { href: '/bay', title: 'Scan bay', subtitle: 'drum by drum', icon: 'probe', action: 'scan.record' },
  { href: '/lots', title: 'Lots', subtitle: 'status and papers', icon: 'drum', action: 'lot.read' },
  { href: '/review', title: 'Review', subtitle: 'lots to decide', icon: 'stamp', action: 'review.read' },
  {
    href: '/deviations',
    title: 'Deviations',
    subtitle: 'what went wrong',
    icon: 'rope-knot',
    action: 'deviation.read'
  },
  {
    href: '/certificates',
    title: 'Certificates',
    subtitle: 'issued and stored',
    icon: 'seal',
    action: 'certificate.read'
  },
  {
    href: '/materials',
    title: 'Materials',
    subtitle: 'and their references',
    icon: 'sack',
    action: 'material.read'
  },
  {
    href: '/methods',
    title: 'Methods',
    subtitle: 'how identity is decided',
    icon: 'waterline',
    action: 'method.read'
  },
  {
    href: '/instruments',
    title: 'Instruments',
    subtitle: 'fit for use',
    icon: 'lamp',
    action: 'instrument.read'
  },
  { href: '/trail', title: 'Audit trail', subtitle: 'who did what', icon: 'pile', action: 'trail.read' },
  { href: '/admin', title: 'Office', subtitle: 'people and settings', icon: 'key', action: 'admin.people' },
  { href: '/help', title: 'Help', subtitle: 'by role, and cautions', icon: 'bell', action: 'help.read' }
];

/** The rooms a person may enter. */
export const roomsFor = (actor: Pick<Actor, 'roles'>): readonly Room[] =>
  ROOMS.filter((room) => can(actor, room.action));
