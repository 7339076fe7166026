import { can } from '$lib/domain/roles';
import { approveMethodVersion, submitMethodVersion } from '$lib/server/commands/methods';
import { database } from '$lib/server/db/client';
import { formFailure, notFound, requireAct, text } from '$lib/server/platform/respond';
import { getMethodVersion, getStoredMethod, listVersionReferences } from '$lib/server/queries/methods';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const found = (await getMethodVersion(db, params.version)) ?? notFound('method version');
  const stored = await getStoredMethod(db, params.version);
  const { bundle: _bundle, ...version } = found.version;
  return {
    version,
    method: found.method,
    material: found.material,
    fitted: stored && {
      engineVersion: stored.fitted.engineVersion,
      limits: stored.fitted.model.limits,
      referenceCount: stored.fitted.referenceCount,
      sourceCount: stored.fitted.sourceCount,
      cautions: stored.fitted.cautions,
      bands: stored.fitted.bands,
      gridCm1: stored.fitted.displayGridCm1,
      mean: stored.fitted.displayMean,
      low: stored.fitted.displayLow,
      high: stored.fitted.displayHigh
    },
    references: (await listVersionReferences(db, params.version)).map((row) => row.reference),
    maySubmit: can(actor, 'method.submit') && found.version.authorId === actor.id,
    mayApprove: can(actor, 'method.approve') && found.version.authorId !== actor.id
  };
};

async function signing(
  event: Parameters<Actions[string]>[0],
  command: typeof submitMethodVersion | typeof approveMethodVersion
) {
  const form = await event.request.formData();
  const reason = text(form, 'reason');
  const outcome = await command(database(), requireAct(event.locals), {
    versionId: event.params.version as string,
    reason,
    password: String(form.get('password') ?? ''),
    oneTimeCode: text(form, 'oneTimeCode') || undefined
  });
  return outcome.ok ? { signed: true } : formFailure(outcome, { reason });
}

export const actions: Actions = {
  submit: (event) => signing(event, submitMethodVersion),
  approve: (event) => signing(event, approveMethodVersion)
};
