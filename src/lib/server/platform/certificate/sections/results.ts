import type { CertificateAttempt, CertificateData } from '../../../../domain/certificate';
import { formatAgainstLimit } from '../../../../domain/formatNumber';
import { VERDICT_NAMES } from '../../../../domain/scans';
import { recordTime } from '../../../../domain/time';
import { FONT } from '../fonts';
import { verdictMark } from '../marks';
import { BOX, ensureRoom, heading, heightOf, LINE, SOFT, write, type Page, type TextOptions } from '../page';

interface Column {
  readonly title: string;
  readonly x: number;
  readonly width: number;
  readonly align?: 'right';
}

const COLUMNS: readonly Column[] = [
  { title: 'Container', x: 0, width: 48 },
  { title: 'Attempt', x: 50, width: 36 },
  { title: 'Verdict', x: 90, width: 76 },
  { title: 'r (at least)', x: 168, width: 78 },
  { title: 'T2 (at most)', x: 248, width: 72 },
  { title: 'Q (at most)', x: 322, width: 72 },
  { title: 'When, by whom, on what', x: 398, width: BOX.width - 398 }
];

/** Every attempt of every container, passes and all others. */
export function resultsSection(page: Page, data: CertificateData): void {
  heading(page, 'Results', 80);
  const failed = data.attempts.filter((attempt) => attempt.verdict !== 'pass').length;
  const summary =
    failed === 0
      ? 'Every scan is listed; all passed.'
      : `Every scan is listed; ${failed} did not pass and ${failed === 1 ? 'is' : 'are'} shown with the reason.`;
  page.y += write(page, summary, BOX.left, page.y) + 4;
  drawHead(page);
  for (const attempt of data.attempts) drawRow(page, data, attempt);
}

function drawHead(page: Page): void {
  for (const column of COLUMNS)
    write(page, column.title, BOX.left + column.x, page.y, { size: 7.5, color: SOFT, width: column.width });
  page.y += 11;
  page.doc
    .moveTo(BOX.left, page.y)
    .lineTo(BOX.left + BOX.width, page.y)
    .lineWidth(0.6)
    .strokeColor(LINE)
    .stroke();
  page.y += 3;
}

/** A value beside its limit; digits are added until the display agrees with the verdict. */
function pair(value: number | null, limit: number | null): string {
  if (value === null || limit === null) return 'not computed';
  const shown = formatAgainstLimit(value, limit);
  return `${shown.value} (${shown.limit})`;
}

function drawRow(page: Page, data: CertificateData, attempt: CertificateAttempt): void {
  const small: TextOptions = { size: 8 };
  const note = attempt.verdict === 'pass' ? (attempt.nearLimit ? 'Near a limit.' : '') : attempt.reason;
  const who = `${recordTime(attempt.recordedAt, data.site.timeZone)}, ${attempt.operatorName}, ${attempt.instrument}`;
  const whoHeight = heightOf(page, who, COLUMNS[6].width, { size: 7 });
  const noteHeight = note === '' ? 0 : heightOf(page, note, BOX.width - 90, { size: 7.5 }) + 1;
  const height = Math.max(11, whoHeight) + noteHeight + 3;
  if (ensureRoom(page, height + 4)) drawHead(page);
  const at = (index: number) => BOX.left + COLUMNS[index].x;
  write(page, String(attempt.containerNumber), at(0), page.y, { ...small, font: FONT.mono });
  write(page, String(attempt.attempt), at(1), page.y, { ...small, font: FONT.mono });
  verdictMark(page, attempt.verdict, at(2), page.y + 1, 8);
  write(page, VERDICT_NAMES[attempt.verdict], at(2) + 12, page.y, {
    ...small,
    font: FONT.bold,
    width: COLUMNS[2].width - 12
  });
  write(page, pair(attempt.correlation, attempt.correlationLimit), at(3), page.y, {
    size: 7.5,
    font: FONT.mono,
    width: COLUMNS[3].width
  });
  write(page, pair(attempt.hotellingT2, attempt.t2Limit), at(4), page.y, {
    size: 7.5,
    font: FONT.mono,
    width: COLUMNS[4].width
  });
  write(page, pair(attempt.qResidual, attempt.qLimit), at(5), page.y, {
    size: 7.5,
    font: FONT.mono,
    width: COLUMNS[5].width
  });
  write(page, who, at(6), page.y, { size: 7, width: COLUMNS[6].width });
  if (note !== '')
    write(page, note, at(2), page.y + Math.max(11, whoHeight) + 1, { size: 7.5, width: BOX.width - 90 });
  page.y += height;
  page.doc
    .moveTo(BOX.left, page.y - 1.5)
    .lineTo(BOX.left + BOX.width, page.y - 1.5)
    .lineWidth(0.3)
    .strokeColor(LINE)
    .stroke();
}
