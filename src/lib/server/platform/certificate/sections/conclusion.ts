import type { CertificateData } from '../../../../domain/certificate';
import { SIGNATURE_MEANING_NAMES, type SignatureMeaning } from '../../../../domain/signatures';
import { recordTime } from '../../../../domain/time';
import { FONT } from '../fonts';
import { BOX, ensureRoom, heading, heightOf, INK, write, type Page } from '../page';

/** Deviations, conclusion, cautions and the signature block. */
export function conclusionSection(page: Page, data: CertificateData): void {
  heading(page, 'Deviations');
  if (data.deviations.length === 0) paragraph(page, 'None was opened for this lot.');
  for (const deviation of data.deviations)
    paragraph(page, `${deviation.number}: ${deviation.title}. ${deviation.conclusion}`);
  heading(page, 'Conclusion');
  const sentence =
    data.disposition.outcome === 'release'
      ? `The identity of the containers listed agrees with ${data.material.name}. The lot is released as to identity.`
      : 'The lot is rejected.';
  paragraph(page, sentence);
  paragraph(page, `Reason given: ${data.disposition.reason}`);
  paragraph(
    page,
    'Cautions: identity by Raman spectroscopy does not replace the tests of the monograph, among them the limits of ethylene and diethylene glycol in high-risk materials. Local procedures, regulations and qualified staff decide on use.'
  );
  signatureBlock(page, data);
}

function signatureBlock(page: Page, data: CertificateData): void {
  ensureRoom(page, 84);
  page.y += 8;
  const { signature } = data;
  const meaning = SIGNATURE_MEANING_NAMES[signature.meaning as SignatureMeaning] ?? signature.meaning;
  page.doc.rect(BOX.left, page.y, BOX.width, 66).lineWidth(1).strokeColor(INK).stroke();
  const x = BOX.left + 10;
  write(page, 'Electronically signed by', x, page.y + 8, { size: 8 });
  write(page, `${signature.printedName}, ${signature.role}`, x, page.y + 19, {
    font: FONT.bold,
    size: 11,
    width: BOX.width - 20
  });
  write(page, `${recordTime(signature.signedAt, data.site.timeZone)}. Meaning: ${meaning}.`, x, page.y + 36, {
    size: 9,
    width: BOX.width - 20
  });
  write(page, `Signed record SHA-256 ${signature.recordSha256}`, x, page.y + 51, {
    font: FONT.mono,
    size: 7.5,
    width: BOX.width - 20
  });
  page.y += 74;
}

function paragraph(page: Page, text: string): void {
  const height = heightOf(page, text, BOX.width);
  ensureRoom(page, height + 4);
  write(page, text, BOX.left, page.y);
  page.y += height + 4;
}
