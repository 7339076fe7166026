import { refuse } from '$lib/domain/refusals';
import { requestRepeat } from '$lib/server/commands/repeats';
import { setContainersAside } from '$lib/server/commands/lots';
import { database } from '$lib/server/db/client';
import { formFailure, notFound, requireAct, text } from '$lib/server/platform/respond';
import { listInstruments } from '$lib/server/queries/instruments';
import { getLot } from '$lib/server/queries/lots';
import { getEffectiveVersionId } from '$lib/server/queries/methods';
import { listRepeatRequests } from '$lib/server/queries/scans';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const detail = (await getLot(db, actor.siteId, params.lot)) ?? notFound('lot');
  const repeats = await listRepeatRequests(db, params.lot);
  return {
    lot: detail.lot,
    material: detail.material,
    manufacturer: detail.manufacturer.name,
    containers: detail.containers,
    scans: detail.scans,
    repeats: repeats.map((row) => ({
      containerId: row.request.containerId,
      outcome: row.request.outcome,
      used: row.request.usedByScanId !== null
    })),
    instruments: await listInstruments(db, actor.siteId),
    hasMethod:
      detail.lot.methodVersionId !== null || (await getEffectiveVersionId(db, detail.material.id)) !== null
  };
};

export const actions: Actions = {
  askRepeat: async ({ request, locals }) => {
    const form = await request.formData();
    const values = { scanId: text(form, 'scanId'), cause: text(form, 'cause'), reason: text(form, 'reason') };
    if (!/^[0-9a-f-]{36}$/.test(values.scanId))
      return formFailure(refuse('not-found', 'There is no such scan.'), values);
    const outcome = await requestRepeat(
      database(),
      requireAct(locals),
      values.scanId,
      values.cause,
      values.reason
    );
    return outcome.ok ? { asked: true } : formFailure(outcome, values);
  },
  setAside: async ({ request, locals, params }) => {
    const form = await request.formData();
    const reason = text(form, 'reason');
    const outcome = await setContainersAside(
      database(),
      requireAct(locals),
      params.lot,
      [text(form, 'container')],
      reason
    );
    return outcome.ok ? { setAside: outcome.value.count } : formFailure(outcome, { reason });
  }
};
