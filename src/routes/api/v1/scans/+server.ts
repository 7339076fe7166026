import { json } from '@sveltejs/kit';
import { refuse } from '$lib/domain/refusals';
import { decisionFor, newScanSchema } from '$lib/domain/scans';
import { recordScan } from '$lib/server/commands/scans';
import { database } from '$lib/server/db/client';
import { fieldSentences } from '$lib/server/platform/form';
import { apiProblem, fileOf, requireAct, text } from '$lib/server/platform/respond';
import { evidenceForActor } from '$lib/server/queries/evidence';
import type { RequestHandler } from './$types';

/** Records one scan: multipart form with `file`, `scanId`, `barcode`, `instrumentId` (domain/scans.ts). */
export const POST: RequestHandler = async ({ request, locals }) => {
  const act = requireAct(locals);
  let form: FormData;
  try {
    form = await request.formData();
  } catch {
    return apiProblem(refuse('bad-input', 'The request is not a form with a file. Nothing was stored.'));
  }
  const file = await fileOf(form, 'file');
  if (!file)
    return apiProblem(
      refuse('bad-input', 'No spectrum file came with the request. Nothing was stored.', {
        file: 'Choose the spectrum file'
      })
    );
  const parsed = newScanSchema.safeParse(scanFields(form));
  if (!parsed.success)
    return apiProblem(refuse('bad-input', 'The scan was not recorded.', fieldSentences(parsed.error)));
  const db = database();
  const outcome = await recordScan(db, act, parsed.data, file);
  if (!outcome.ok) return apiProblem(outcome);
  const { decision, ...rest } = outcome.value;
  return json(
    {
      ...rest,
      decision: decisionFor(act.actor, decision),
      evidence: await evidenceForActor(db, act.actor, rest.scanId)
    },
    { status: rest.repeated ? 200 : 201 }
  );
};

function scanFields(form: FormData): Record<string, unknown> {
  const fields: Record<string, unknown> = {
    scanId: text(form, 'scanId'),
    barcode: text(form, 'barcode'),
    instrumentId: text(form, 'instrumentId'),
    repeatReason: text(form, 'repeatReason'),
    sentLate: text(form, 'sentLate') === 'true'
  };
  if (text(form, 'lotId')) fields.lotId = text(form, 'lotId');
  if (text(form, 'clientTime')) fields.clientTime = text(form, 'clientTime');
  if (text(form, 'readOptions')) fields.readOptions = parsedOrRaw(text(form, 'readOptions'));
  return fields;
}

function parsedOrRaw(source: string): unknown {
  try {
    return JSON.parse(source);
  } catch {
    return source;
  }
}
