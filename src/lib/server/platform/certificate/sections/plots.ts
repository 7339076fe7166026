import type { CertificateData, CertificatePlot } from '../../../../domain/certificate';
import { FONT } from '../fonts';
import { BOX, ensureRoom, heading, INK, LINE, SOFT, write, type Page } from '../page';

const HEIGHT = 132;

/** Scans over the envelope of their references, as vectors. */
export function plotsSection(page: Page, data: CertificateData): void {
  if (data.plots.length === 0) return;
  heading(page, 'Spectra', HEIGHT + 60);
  write(
    page,
    'Solid line: scan. Dashed line: mean of the references. Grey: smallest to largest reference. Baseline-corrected, scaled to unit height.',
    BOX.left,
    page.y,
    { size: 8, color: SOFT }
  );
  page.y += 14;
  for (const plot of data.plots) drawPlot(page, plot);
}

function drawPlot(page: Page, plot: CertificatePlot): void {
  ensureRoom(page, HEIGHT + 44);
  const { doc } = page;
  write(page, plot.title, BOX.left, page.y, { font: FONT.bold, size: 8.5 });
  const top = page.y + 14;
  const { gridCm1: grid } = plot;
  const from = grid[0];
  const to = grid[grid.length - 1];
  const all = [...plot.scan, ...plot.low, ...plot.high];
  const lowest = Math.min(0, ...all.filter(Number.isFinite));
  const highest = Math.max(1, ...all.filter(Number.isFinite));
  const px = (shift: number) => BOX.left + ((shift - from) / (to - from)) * BOX.width;
  const py = (value: number) => top + HEIGHT - ((value - lowest) / (highest - lowest)) * HEIGHT;
  const path = (values: readonly number[]) =>
    values
      .map((value, i) => `${i === 0 ? 'M' : 'L'}${px(grid[i]).toFixed(2)} ${py(value).toFixed(2)}`)
      .join('');
  const back = plot.low
    .map((value, i) => `L${px(grid[i]).toFixed(2)} ${py(value).toFixed(2)}`)
    .reverse()
    .join('');
  doc.path(`${path(plot.high)}${back}Z`).fill('#DDE3E0');
  doc.path(path(plot.mean)).lineWidth(0.8).dash(3, { space: 2 }).strokeColor(SOFT).stroke().undash();
  doc.path(path(plot.scan)).lineWidth(0.9).strokeColor(INK).stroke();
  doc
    .moveTo(BOX.left, top + HEIGHT)
    .lineTo(BOX.left + BOX.width, top + HEIGHT)
    .lineWidth(0.8)
    .strokeColor(INK)
    .stroke();
  for (let tick = Math.ceil(from / 200) * 200; tick <= to; tick += 200) {
    doc
      .moveTo(px(tick), top + HEIGHT)
      .lineTo(px(tick), top + HEIGHT + 4)
      .lineWidth(0.8)
      .strokeColor(INK)
      .stroke();
    const x = Math.min(Math.max(px(tick) - 20, BOX.left), BOX.left + BOX.width - 40);
    write(page, String(tick), x, top + HEIGHT + 6, { size: 7, width: 40, align: 'center' });
  }
  write(page, 'Raman shift / cm', BOX.left, top + HEIGHT + 16, {
    size: 7.5,
    width: BOX.width - 4,
    align: 'center'
  });
  const middle = BOX.left + (BOX.width - 4) / 2;
  doc.font(FONT.text).fontSize(7.5);
  write(page, '\u22121', middle + doc.widthOfString('Raman shift / cm') / 2 + 0.5, top + HEIGHT + 14, {
    size: 5.5,
    width: 20
  });
  doc
    .moveTo(BOX.left, top)
    .lineTo(BOX.left, top + HEIGHT)
    .lineWidth(0.4)
    .strokeColor(LINE)
    .stroke();
  page.y = top + HEIGHT + 32;
}
