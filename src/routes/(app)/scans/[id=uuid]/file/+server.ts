import { database } from '$lib/server/db/client';
import { download, notFound } from '$lib/server/platform/respond';
import { getRawFile, getScan } from '$lib/server/queries/scans';
import type { RequestHandler } from './$types';

export const GET: RequestHandler = async ({ params }) => {
  const db = database();
  const found = (await getScan(db, params.id)) ?? notFound('scan');
  const file = (await getRawFile(db, found.file.id)) ?? notFound('file');
  return download(file.bytes, file.fileName, 'application/octet-stream');
};
