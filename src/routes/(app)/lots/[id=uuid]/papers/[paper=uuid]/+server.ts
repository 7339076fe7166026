import { database } from '$lib/server/db/client';
import { download, notFound, requireAct } from '$lib/server/platform/respond';
import { getPaper } from '$lib/server/queries/lots';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = async ({ locals, params }) => {
  const found = await getPaper(database(), requireAct(locals).actor.siteId, params.paper);
  if (!found || found.lot.id !== params.id) notFound('paper');
  return download(found.file.bytes, found.file.fileName, found.file.mediaType);
};
