import { error, fail, json } from '@sveltejs/kit';
import { problemOf, REFUSALS, type Refusal } from '../../domain/refusals';
import type { Act } from './act';

/** The signed-in person's act; the gate has let nobody else through, so its absence is a bug. */
export function requireAct(locals: App.Locals): Act {
  if (!locals.act) throw new Error('a route that needs a signed-in person was opened without one');
  return locals.act;
}

/** A refused form: the same page again with the problem, the fields' sentences and what had been typed. */
export function formFailure(refusal: Refusal, values: Record<string, unknown> = {}) {
  return fail(REFUSALS[refusal.code].status, {
    problem: problemOf(refusal),
    fields: refusal.fields ?? {},
    values
  });
}

/** A refused API call as a problem document (RFC 9457). */
export function apiProblem(refusal: Refusal): Response {
  const problem = problemOf(refusal);
  return json(problem, { status: problem.status, headers: { 'content-type': 'application/problem+json' } });
}

/** Ends the request with the "no such record" page, the same for absent and for another site's. */
export function notFound(what: string): never {
  error(404, { message: `There is no such ${what}.`, errorId: '' });
}

/** A form's text field, trimmed; absent is empty. */
export const text = (form: FormData, name: string): string => {
  const value = form.get(name);
  return typeof value === 'string' ? value.trim() : '';
};

/** A form's file with its bytes, or null when none was chosen. */
export async function fileOf(form: FormData, name: string) {
  const file = form.get(name);
  if (!(file instanceof File) || (file.size === 0 && file.name === '')) return null;
  return { fileName: file.name, mediaType: file.type, bytes: new Uint8Array(await file.arrayBuffer()) };
}

/** Bytes as a download with a safe file name (RFC 6266); never sniffed, never run. */
export function download(bytes: Uint8Array, fileName: string, mediaType: string, inline = false): Response {
  const ascii = fileName.replaceAll(/[^A-Za-z0-9._ -]/g, '_').slice(0, 150) || 'file';
  const encoded = encodeURIComponent(fileName.slice(0, 150)).replaceAll(
    /['()*]/g,
    (character) => `%${character.charCodeAt(0).toString(16).toUpperCase()}`
  );
  const disposition = inline ? 'inline' : 'attachment';
  return new Response(Uint8Array.from(bytes), {
    headers: {
      'content-type': mediaType,
      'content-disposition': `${disposition}; filename="${ascii}"; filename*=UTF-8''${encoded}`,
      'x-content-type-options': 'nosniff',
      'content-security-policy': "default-src 'none'; sandbox",
      'cache-control': 'private, no-store'
    }
  });
}
