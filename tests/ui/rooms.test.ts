import { describe, expect, it } from 'vitest';
import { ROOMS } from '$lib/domain/navigation';
import { isIcon } from '$lib/ui/marks/icons';
import { roomOf } from '$lib/ui/shell/roomOf';

describe('the rail of rooms', () => {
  it.each(ROOMS.map((room) => [room.title, room.icon]))('%s has its icon drawn: %s', (_, icon) => {
    expect(isIcon(icon)).toBe(true);
  });

  it('knows no icon of a name that was never drawn', () => {
    expect(isIcon('toString')).toBe(false);
  });

  it.each([
    ['/', 'Tally'],
    ['/lots', 'Lots'],
    ['/lots/7c9e6679-7425-40de-944b-e07fc1f90ae7', 'Lots'],
    ['/scans/7c9e6679-7425-40de-944b-e07fc1f90ae7', 'Lots'],
    ['/admin/mail', 'Office']
  ])('%s lies in %s', (path, title) => {
    expect(roomOf(path, ROOMS)?.title).toBe(title);
  });

  it('is in no room where no room has the page: the Tally is not everywhere', () => {
    expect(roomOf('/nowhere', ROOMS)).toBeNull();
    expect(roomOf('/lotsmore', ROOMS)).toBeNull();
  });
});
