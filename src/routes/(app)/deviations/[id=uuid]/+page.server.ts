import { can } from '$lib/domain/roles';
import { addDeviationNote, concludeDeviation } from '$lib/server/commands/deviations';
import { database } from '$lib/server/db/client';
import { formFailure, notFound, requireAct, text } from '$lib/server/platform/respond';
import { getDeviation, listDeviationNotes } from '$lib/server/queries/deviations';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const found = (await getDeviation(db, params.id)) ?? notFound('deviation');
  return {
    deviation: found.deviation,
    lotNumber: found.lot?.lotNumber ?? null,
    notes: await listDeviationNotes(db, params.id),
    mayWork: can(actor, 'deviation.work'),
    mayClose: can(actor, 'deviation.close')
  };
};

export const actions: Actions = {
  note: async ({ request, locals, params }) => {
    const note = text(await request.formData(), 'note');
    const outcome = await addDeviationNote(database(), requireAct(locals), params.id, note);
    return outcome.ok ? { noted: true } : formFailure(outcome, { note });
  },
  conclude: async ({ request, locals, params }) => {
    const form = await request.formData();
    const values = {
      causeCategory: text(form, 'causeCategory'),
      cause: text(form, 'cause'),
      impact: text(form, 'impact'),
      action: text(form, 'action')
    };
    const outcome = await concludeDeviation(database(), requireAct(locals), {
      id: params.id,
      ...values,
      password: String(form.get('password') ?? ''),
      oneTimeCode: text(form, 'oneTimeCode') || undefined
    });
    return outcome.ok ? { concluded: true } : formFailure(outcome, values);
  }
};
