import { database } from '$lib/server/db/client';
import { download, notFound, requireAct } from '$lib/server/platform/respond';
import { getCertificate } from '$lib/server/queries/certificates';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = async ({ locals, params }) => {
  const found =
    (await getCertificate(database(), requireAct(locals).actor.siteId, params.id)) ?? notFound('certificate');
  return download(found.pdf, `${found.number}.pdf`, 'application/pdf');
};
