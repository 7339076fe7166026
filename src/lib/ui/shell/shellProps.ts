import type { Snippet } from 'svelte';
import type { Room } from '$lib/domain/navigation';

/** What every signed-in page is framed by. */
export interface ShellProps {
  readonly rooms: readonly Room[];
  readonly person: {
    readonly printedName: string;
    readonly userName: string;
    readonly roles: readonly string[];
  };
  readonly timeZone: string;
  readonly demo: boolean;
  readonly serverTime: string;
  readonly children: Snippet;
}
