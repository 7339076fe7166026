import { refuse } from '$lib/domain/refusals';
import { can } from '$lib/domain/roles';
import { recordPerformanceCheck, takeOutOfService } from '$lib/server/commands/instruments';
import { database } from '$lib/server/db/client';
import { fileOf, formFailure, notFound, requireAct, text } from '$lib/server/platform/respond';
import { getInstrument, listChecks, listLogbook, listToleranceSets } from '$lib/server/queries/instruments';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const standing = await getInstrument(db, params.id);
  if (!standing || standing.instrument.siteId !== actor.siteId) notFound('instrument');
  return {
    ...standing,
    checks: await listChecks(db, params.id),
    logbook: await listLogbook(db, params.id),
    toleranceSets: await listToleranceSets(db),
    mayCheck: can(actor, 'instrument.check'),
    mayTakeOut: can(actor, 'instrument.take-out')
  };
};

export const actions: Actions = {
  check: async ({ request, locals, params }) => {
    const form = await request.formData();
    const values = { toleranceSetId: text(form, 'toleranceSetId'), standardLot: text(form, 'standardLot') };
    const file = await fileOf(form, 'file');
    if (!file)
      return formFailure(
        refuse('bad-input', "Choose the standard's spectrum.", { file: "Choose the standard's spectrum" }),
        values
      );
    if (!/^[0-9a-f-]{36}$/.test(values.toleranceSetId))
      return formFailure(
        refuse('bad-input', 'Choose the standard.', { toleranceSetId: 'Choose the standard' }),
        values
      );
    const outcome = await recordPerformanceCheck(
      database(),
      requireAct(locals),
      { instrumentId: params.id, ...values },
      file
    );
    return outcome.ok ? { check: outcome.value } : formFailure(outcome, values);
  },
  takeOut: async ({ request, locals, params }) => {
    const reason = text(await request.formData(), 'reason');
    const outcome = await takeOutOfService(database(), requireAct(locals), params.id, reason);
    return outcome.ok ? { takenOut: true } : formFailure(outcome, { reason });
  }
};
