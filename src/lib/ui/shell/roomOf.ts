import type { Room } from '$lib/domain/navigation';

/** Pages that belong to a room without their address saying so: a scan is evidence of a lot. */
const BELONGS: Readonly<Record<string, string>> = { '/scans': '/lots' };

const under = (path: string, href: string) => path === href || path.startsWith(`${href}/`);

/** The room a page lies in, or null; the Tally (`/`) is only itself. */
export function roomOf(path: string, rooms: readonly Room[]): Room | null {
  const moved = Object.keys(BELONGS).find((start) => under(path, start));
  const place = moved ? BELONGS[moved] : path;
  return rooms.find((room) => (room.href === '/' ? place === '/' : under(place, room.href))) ?? null;
}
