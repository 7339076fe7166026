import { roomsFor } from '$lib/domain/navigation';
import { ROLE_NAMES } from '$lib/domain/roles';
import { requireAct } from '$lib/server/platform/respond';
import type { LayoutServerLoad } from './$types';

export const load: LayoutServerLoad = ({ locals }) => {
  const { actor } = requireAct(locals);
  return {
    rooms: roomsFor(actor),
    person: {
      printedName: actor.printedName,
      userName: actor.userName,
      roles: actor.roles.map((role) => ROLE_NAMES[role]),
      roleIds: actor.roles
    },
    timeZone: actor.timeZone,
    demo: actor.demo,
    serverTime: new Date().toISOString()
  };
};
