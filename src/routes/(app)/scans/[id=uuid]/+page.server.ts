import { can } from '$lib/domain/roles';
import { decisionFor } from '$lib/domain/scans';
import { replayScan } from '$lib/server/queries/replay';
import { database } from '$lib/server/db/client';
import { notFound, requireAct } from '$lib/server/platform/respond';
import { evidenceForActor } from '$lib/server/queries/evidence';
import { getMethodVersion } from '$lib/server/queries/methods';
import { getScan, listScans, parseDecision } from '$lib/server/queries/scans';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const found = (await getScan(db, params.id)) ?? notFound('scan');
  const attempts = (await listScans(db, found.lot.id)).filter(
    (scan) => scan.containerId === found.container.id
  );
  const version = await getMethodVersion(db, found.scan.methodVersionId);
  const { result, ...stored } = found.decision;
  return {
    scan: found.scan,
    stored,
    container: found.container,
    lot: { id: found.lot.id, lotNumber: found.lot.lotNumber, status: found.lot.status },
    material: found.material,
    instrument: found.instrument,
    file: found.file,
    decision: decisionFor(actor, parseDecision(result)),
    evidence: await evidenceForActor(db, actor, params.id),
    method: version && {
      id: version.version.id,
      code: version.method.code,
      version: version.version.version,
      recipe: version.version.definition.recipe
    },
    attempts,
    mayReplay: can(actor, 'scan.replay'),
    mayReadMethod: can(actor, 'method.read')
  };
};

export const actions: Actions = {
  replay: async ({ params }) => ({ replay: (await replayScan(database(), params.id)) ?? notFound('scan') })
};
