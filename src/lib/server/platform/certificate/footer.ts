import type { CertificateData } from '../../../domain/certificate';
import { groupedCode } from '../../../domain/certificate';
import { recordTime } from '../../../domain/time';
import { FONT } from './fonts';
import { BOX, LINE, SOFT, write, type Page } from './page';

/** Header and footer of every page, once the number of pages is known. */
export function drawFrames(page: Page, data: CertificateData): void {
  const { doc } = page;
  const range = doc.bufferedPageRange();
  for (let i = 0; i < range.count; i++) {
    doc.switchToPage(range.start + i);
    const head = data.demo ? 'DEMO: invented data, not a certificate of real goods' : data.site.name;
    write(page, head, BOX.left, 34, { font: data.demo ? FONT.bold : FONT.text, size: 8, width: 330 });
    write(page, `${data.number}  ·  page ${i + 1} of ${range.count}`, BOX.left + 300, 34, {
      size: 8,
      width: BOX.width - 300,
      align: 'right',
      color: SOFT
    });
    doc
      .moveTo(BOX.left, 48)
      .lineTo(BOX.left + BOX.width, 48)
      .lineWidth(0.5)
      .strokeColor(LINE)
      .stroke();
    doc
      .moveTo(BOX.left, 760)
      .lineTo(BOX.left + BOX.width, 760)
      .lineWidth(0.5)
      .strokeColor(LINE)
      .stroke();
    const root = data.treeHead
      ? `trail sealed to entry ${data.treeHead.size}, root ${data.treeHead.rootHash.slice(0, 16)}`
      : 'trail not yet sealed';
    write(
      page,
      `Verification code ${groupedCode(data.verificationCode)}  ·  record ${data.signature.recordSha256.slice(0, 16)}  ·  ${root}`,
      BOX.left,
      766,
      { size: 7, color: SOFT }
    );
    write(
      page,
      `Issued ${recordTime(data.issuedAt, data.site.timeZone)} by ${data.issuedBy}. A copy is uncontrolled unless its code is verified.`,
      BOX.left,
      776,
      { size: 7, color: SOFT }
    );
  }
}
