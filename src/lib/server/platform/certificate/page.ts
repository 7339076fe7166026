import PDFDocument from 'pdfkit';
import type { CertificateData } from '../../../domain/certificate';
import { FONT, fontFiles, inHouseFont, type FontName } from './fonts';

/** 180 x 249 mm content box: fits A4 and Letter with 15 mm margins. Points. */
export const BOX = { left: 42.52, top: 62, width: 510.24, bottom: 745 } as const;
export const INK = '#12201F';
export const SOFT = '#52605D';
export const LINE = '#C6CFCB';

export type Document = InstanceType<typeof PDFDocument>;

export interface TextOptions {
  readonly font?: FontName;
  readonly size?: number;
  readonly color?: string;
  readonly width?: number;
  readonly align?: 'left' | 'right' | 'center';
}

/** The document being written and where the next block begins. */
export interface Page {
  readonly doc: Document;
  y: number;
}

/** A new A4 document with embedded fonts and metadata; dates come from the data, so bytes are reproducible. */
export function openDocument(data: CertificateData): Page {
  const doc = new PDFDocument({
    size: 'A4',
    margin: 0,
    bufferPages: true,
    pdfVersion: '1.7',
    tagged: true,
    lang: 'en-GB',
    displayTitle: true,
    font: undefined as unknown as string,
    info: {
      Title: `Identity certificate ${data.number}, lot ${data.lot.lotNumber}`,
      Author: data.site.name,
      Subject: `Identity test by Raman spectroscopy of ${data.material.name}`,
      Creator: 'Wharfinger',
      Producer: 'Wharfinger',
      CreationDate: data.issuedAt,
      ModDate: data.issuedAt
    }
  });
  const files = fontFiles();
  for (const name of Object.values(FONT)) doc.registerFont(name, files[name]);
  doc.font(FONT.text);
  return { doc, y: BOX.top };
}

/** Writes text at a place and returns its height; characters the house fonts lack come from the fallback font. */
export function write(page: Page, text: string, x: number, y: number, options: TextOptions = {}): number {
  const {
    font = FONT.text,
    size = 9,
    color = INK,
    width = BOX.left + BOX.width - x,
    align = 'left'
  } = options;
  const { doc } = page;
  doc
    .font(inHouseFont(text) ? font : FONT.fallback)
    .fontSize(size)
    .fillColor(color);
  const height = doc.heightOfString(text || ' ', { width, align });
  if (text !== '') doc.text(text, x, y, { width, align, lineGap: 0 });
  return height;
}

/** Height the text would take. */
export function heightOf(page: Page, text: string, width: number, options: TextOptions = {}): number {
  const { font = FONT.text, size = 9 } = options;
  page.doc.font(inHouseFont(text) ? font : FONT.fallback).fontSize(size);
  return page.doc.heightOfString(text || ' ', { width });
}

/** Begins a new page when fewer than `needed` points are left. */
export function ensureRoom(page: Page, needed: number): boolean {
  if (page.y + needed <= BOX.bottom) return false;
  page.doc.addPage();
  page.y = BOX.top;
  return true;
}

/** A section's heading with its rule. */
export function heading(page: Page, title: string, needed = 60): void {
  ensureRoom(page, needed);
  page.y += 10;
  const height = write(page, title, BOX.left, page.y, { font: FONT.bold, size: 11 });
  page.y += height + 2;
  page.doc
    .moveTo(BOX.left, page.y)
    .lineTo(BOX.left + BOX.width, page.y)
    .lineWidth(0.8)
    .strokeColor(INK)
    .stroke();
  page.y += 5;
}

/** Two columns of term and value; long values wrap. */
export function facts(page: Page, rows: readonly (readonly [string, string])[]): void {
  const column = BOX.width / 2;
  for (let i = 0; i < rows.length; i += 2) {
    const pair = rows.slice(i, i + 2);
    const heights = pair.map(([, value]) => heightOf(page, value, column - 108));
    const height = Math.max(12, ...heights);
    ensureRoom(page, height + 2);
    pair.forEach(([term, value], index) => {
      const x = BOX.left + index * column;
      write(page, term, x, page.y, { color: SOFT, width: 96 });
      write(page, value, x + 98, page.y, { width: column - 108 });
    });
    page.y += height + 2;
  }
}
