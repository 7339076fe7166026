import type { CertificateData } from '../../../../domain/certificate';
import { recordTime } from '../../../../domain/time';
import { FONT } from '../fonts';
import { BOX, ensureRoom, facts, heading, heightOf, SOFT, write, type Page } from '../page';

/** By what the identity was decided: method, recipe, instruments and their checks. */
export function methodSection(page: Page, data: CertificateData): void {
  heading(page, 'Method and instruments');
  const { method } = data;
  facts(page, [
    ['Method', `${method.code} version ${method.version}`],
    ['References', `${method.referenceCount} spectra from ${method.sourceCount} sources`],
    ['Engine version', method.engineVersion],
    ['Principle', 'Correlation, class model (T2, Q) and best match against all other materials']
  ]);
  paragraph(page, `Preprocessing, in order: ${method.recipe.join('; ')}.`);
  paragraph(page, `Method content SHA-256 ${method.bundleSha256}`, FONT.mono, 7.5);
  for (const check of data.checks) {
    paragraph(
      page,
      `Instrument ${check.instrument} (serial ${check.serial}, ${check.excitationNm} nm): performance check with ${check.standard} ${check.outcome} on ${recordTime(check.performedAt, data.site.timeZone)}.`
    );
  }
}

function paragraph(
  page: Page,
  text: string,
  font: (typeof FONT)[keyof typeof FONT] = FONT.text,
  size = 9
): void {
  const height = heightOf(page, text, BOX.width, { font, size });
  ensureRoom(page, height + 3);
  write(page, text, BOX.left, page.y, { font, size, color: font === FONT.mono ? SOFT : undefined });
  page.y += height + 3;
}
