import { database } from '$lib/server/db/client';
import { findCertificateByCode } from '$lib/server/queries/certificates';
import type { PageServerLoad } from './$types';

/** Public: says whether the code is of a certificate we issued, and nothing of what it certifies. */
export const load: PageServerLoad = async ({ params }) => {
  const code = params.code
    .toUpperCase()
    .replaceAll(/[^A-Z0-9]/g, '')
    .slice(0, 40);
  const found = await findCertificateByCode(database(), code);
  return {
    code,
    genuine: found !== null,
    number: found?.number ?? null,
    issuedAt: found?.issuedAt.toISOString() ?? null,
    sha256: found?.sha256 ?? null
  };
};
