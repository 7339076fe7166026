import type { Verdict } from '../../../identity/decision';
import { INK, type Page } from './page';

/** The verdict's mark in black: shape alone tells the verdicts apart on a greyscale print. */
export function verdictMark(page: Page, verdict: Verdict, x: number, y: number, size: number): void {
  const { doc } = page;
  const s = size / 24;
  doc.save().translate(x, y).scale(s);
  if (verdict === 'pass') {
    doc.rect(1, 1, 22, 22).fill(INK);
    doc.moveTo(6, 12.5).lineTo(10.5, 17).lineTo(18, 7.5).lineWidth(3).strokeColor('#FFFFFF').stroke();
  } else if (verdict === 'fail') {
    doc.circle(12, 12, 11).fill(INK);
    doc.rect(5, 10, 14, 4).fill('#FFFFFF');
  } else if (verdict === 'inconclusive') {
    doc.moveTo(12, 2).lineTo(23, 22).lineTo(1, 22).closePath().lineWidth(2.5).strokeColor(INK).stroke();
    doc.moveTo(12, 9).lineTo(12, 15).lineWidth(2.5).stroke();
    doc.circle(12, 18.5, 1.4).fill(INK);
  } else {
    doc.rect(2, 2, 20, 20).dash(4, { space: 3 }).lineWidth(2.5).strokeColor(INK).stroke().undash();
    doc.moveTo(5, 19).lineTo(19, 5).lineWidth(2.5).stroke();
  }
  doc.restore();
}
