import { rolesFor } from '$lib/domain/roles';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = () => ({
  who: {
    register: rolesFor('delivery.register'),
    scan: rolesFor('scan.record'),
    release: rolesFor('lot.release'),
    method: rolesFor('method.write'),
    trail: rolesFor('trail.read')
  }
});
