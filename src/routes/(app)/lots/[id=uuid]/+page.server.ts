import { refuse } from '$lib/domain/refusals';
import { can } from '$lib/domain/roles';
import { attachPaper, disposeLot, recordLimitTest, setContainersAside } from '$lib/server/commands/lots';
import { decideRepeat } from '$lib/server/commands/repeats';
import { database } from '$lib/server/db/client';
import { fileOf, formFailure, notFound, requireAct, text } from '$lib/server/platform/respond';
import { dispositionPreview } from '$lib/server/queries/dispositionRecord';
import { getLot, getReleaseConditions } from '$lib/server/queries/lots';
import { listRepeatRequests } from '$lib/server/queries/scans';
import { listLotHistory } from '$lib/server/queries/trail';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const detail = (await getLot(db, actor.siteId, params.id)) ?? notFound('lot');
  const mayDecide = can(actor, 'lot.release');
  return {
    ...detail,
    conditions: await getReleaseConditions(db, detail, actor.id, actor.timeZone),
    repeats: await listRepeatRequests(db, params.id),
    history: can(actor, 'trail.read') ? await listLotHistory(db, params.id) : null,
    mayDecide,
    mayGrant: can(actor, 'repeat.grant'),
    mayAttach: can(actor, 'paper.attach'),
    mayScan: can(actor, 'scan.record'),
    mayRecordLimitTest: can(actor, 'limit-test.record'),
    preview: mayDecide
      ? {
          release: (await dispositionPreview(detail, 'release')).sha256,
          reject: (await dispositionPreview(detail, 'reject')).sha256
        }
      : null
  };
};

async function dispose(event: Parameters<Actions[string]>[0], outcome: 'release' | 'reject') {
  const form = await event.request.formData();
  const reason = text(form, 'reason');
  const result = await disposeLot(database(), requireAct(event.locals), {
    lotId: event.params.id as string,
    outcome,
    reason,
    password: String(form.get('password') ?? ''),
    oneTimeCode: text(form, 'oneTimeCode') || undefined,
    seenSha256: text(form, 'recordSha256'),
    origin: event.url.origin
  });
  if (!result.ok) return formFailure(result, { reason, outcome });
  return { decided: outcome, certificateId: result.value.certificateId };
}

export const actions: Actions = {
  release: (event) => dispose(event, 'release'),
  reject: (event) => dispose(event, 'reject'),
  paper: async ({ request, locals, params }) => {
    const form = await request.formData();
    const file = await fileOf(form, 'file');
    const values = { kind: text(form, 'kind'), note: text(form, 'note') };
    if (!file) return formFailure(refuse('bad-input', 'Choose a file.', { file: 'Choose a file' }), values);
    const outcome = await attachPaper(
      database(),
      requireAct(locals),
      params.id,
      values.kind,
      values.note,
      file
    );
    return outcome.ok ? { attached: true } : formFailure(outcome, values);
  },
  limitTest: async ({ request, locals, params }) => {
    const form = await request.formData();
    const values = { outcome: text(form, 'outcome'), reportNumber: text(form, 'reportNumber') };
    if (values.outcome !== 'complies' && values.outcome !== 'does_not_comply') {
      return formFailure(refuse('bad-input', 'Choose the result.', { outcome: 'Choose the result' }), values);
    }
    const outcome = await recordLimitTest(
      database(),
      requireAct(locals),
      params.id,
      values.outcome,
      values.reportNumber
    );
    return outcome.ok ? { recorded: true } : formFailure(outcome, values);
  },
  setAside: async ({ request, locals, params }) => {
    const form = await request.formData();
    const reason = text(form, 'reason');
    const outcome = await setContainersAside(
      database(),
      requireAct(locals),
      params.id,
      form.getAll('container').map(String),
      reason
    );
    return outcome.ok ? { setAside: outcome.value.count } : formFailure(outcome, { reason });
  },
  repeat: async ({ request, locals }) => {
    const form = await request.formData();
    const values = { requestId: text(form, 'requestId'), reason: text(form, 'reason') };
    const outcome = await decideRepeat(database(), requireAct(locals), {
      ...values,
      outcome: text(form, 'outcome') === 'granted' ? 'granted' : 'declined',
      password: String(form.get('password') ?? ''),
      oneTimeCode: text(form, 'oneTimeCode') || undefined
    });
    return outcome.ok ? { repeatDecided: true } : formFailure(outcome, values);
  }
};
