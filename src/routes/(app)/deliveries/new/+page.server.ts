import { redirect } from '@sveltejs/kit';
import { newDeliverySchema } from '$lib/domain/deliveries';
import { refuse } from '$lib/domain/refusals';
import { registerDelivery } from '$lib/server/commands/deliveries';
import { database } from '$lib/server/db/client';
import { fieldSentences, nested } from '$lib/server/platform/form';
import { formFailure, requireAct } from '$lib/server/platform/respond';
import { getIntakeChoices } from '$lib/server/queries/deliveries';
import { siteToday } from '$lib/server/queries/clock';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor } = requireAct(locals);
  const db = database();
  return { choices: await getIntakeChoices(db), today: await siteToday(db, actor.timeZone) };
};

export const actions: Actions = {
  register: async ({ request, locals }) => {
    const values = nested(await request.formData());
    const parsed = newDeliverySchema.safeParse(values);
    if (!parsed.success) {
      const fields = fieldSentences(parsed.error);
      return formFailure(refuse('bad-input', 'Nothing was stored yet.', fields), values);
    }
    const outcome = await registerDelivery(database(), requireAct(locals), parsed.data);
    if (!outcome.ok) return formFailure(outcome, values);
    redirect(303, `/deliveries/${outcome.value.id}?new=1`);
  }
};
