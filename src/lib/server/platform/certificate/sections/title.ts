import QRCode from 'qrcode';
import { groupedCode, type CertificateData } from '../../../../domain/certificate';
import { FONT } from '../fonts';
import { BOX, INK, SOFT, write, type Page } from '../page';

/** What the certificate is, what it is not, and the code that proves it genuine. */
export function titleSection(page: Page, data: CertificateData): void {
  const top = page.y;
  const textWidth = BOX.width - 110;
  let y = top;
  y += write(page, 'Identity certificate', BOX.left, y, { font: FONT.bold, size: 20, width: textWidth });
  y += 2 + write(page, data.number, BOX.left, y, { font: FONT.mono, size: 11, width: textWidth });
  y += write(page, `${data.site.name}, ${data.site.dock}`, BOX.left, y, {
    size: 9,
    color: SOFT,
    width: textWidth
  });
  y += 6;
  const outcome = data.disposition.outcome === 'release' ? 'Lot released' : 'Lot rejected';
  y += write(page, outcome, BOX.left, y, { font: FONT.bold, size: 13, width: textWidth });
  y += 2;
  y += write(
    page,
    'Scope: identity test by Raman spectroscopy only. This certificate does not state purity, potency, or the result of any other test of the specification.',
    BOX.left,
    y,
    { size: 9, width: textWidth }
  );
  drawQr(page, data.verificationUrl, BOX.left + BOX.width - 86, top, 86);
  write(page, groupedCode(data.verificationCode), BOX.left + BOX.width - 104, top + 90, {
    font: FONT.mono,
    size: 7.5,
    width: 104,
    align: 'right'
  });
  page.y = Math.max(y, top + 104);
}

/** The QR code as vector squares, with its quiet zone left white. */
function drawQr(page: Page, content: string, x: number, y: number, size: number): void {
  const { modules } = QRCode.create(content, { errorCorrectionLevel: 'Q' });
  const quiet = 2;
  const cell = size / (modules.size + 2 * quiet);
  page.doc.fillColor(INK);
  for (let row = 0; row < modules.size; row++) {
    for (let column = 0; column < modules.size; column++) {
      if (modules.get(row, column))
        page.doc.rect(x + (column + quiet) * cell, y + (row + quiet) * cell, cell, cell);
    }
  }
  page.doc.fill();
}
