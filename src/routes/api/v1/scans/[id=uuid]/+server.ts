import { json } from '@sveltejs/kit';
import { refuse } from '$lib/domain/refusals';
import { decisionFor } from '$lib/domain/scans';
import { database } from '$lib/server/db/client';
import { apiProblem, requireAct } from '$lib/server/platform/respond';
import { getScan, parseDecision } from '$lib/server/queries/scans';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const found = await getScan(database(), params.id);
  if (!found) return apiProblem(refuse('not-found', 'There is no such scan.'));
  return json({
    scanId: found.scan.id,
    lotId: found.lot.id,
    lotNumber: found.lot.lotNumber,
    containerNumber: found.container.number,
    attempt: found.scan.attempt,
    recordedAt: found.scan.recordedAt.toISOString(),
    operator: found.scan.operatorName,
    file: { fileName: found.file.fileName, sha256: found.file.sha256, size: found.file.size },
    decisionSha256: found.decision.resultSha256,
    decision: decisionFor(actor, parseDecision(found.decision.result))
  });
};
