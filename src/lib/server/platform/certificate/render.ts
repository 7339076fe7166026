import type { CertificateData } from '../../../domain/certificate';
import { drawFrames } from './footer';
import { openDocument, type Page } from './page';
import { conclusionSection } from './sections/conclusion';
import { goodsSection } from './sections/goods';
import { methodSection } from './sections/method';
import { plotsSection } from './sections/plots';
import { resultsSection } from './sections/results';
import { titleSection } from './sections/title';

/** The certificate's sections in the order they are printed. */
const SECTIONS: readonly ((page: Page, data: CertificateData) => void)[] = [
  titleSection,
  goodsSection,
  methodSection,
  resultsSection,
  plotsSection,
  conclusionSection
];

/** Renders a certificate as PDF: the same data gives the same bytes. */
export function renderCertificate(data: CertificateData): Promise<Uint8Array> {
  const page = openDocument(data);
  const chunks: Buffer[] = [];
  const finished = new Promise<Uint8Array>((resolve, reject) => {
    page.doc.on('data', (chunk: Buffer) => chunks.push(chunk));
    page.doc.on('end', () => resolve(new Uint8Array(Buffer.concat(chunks))));
    page.doc.on('error', reject);
  });
  for (const section of SECTIONS) section(page, data);
  drawFrames(page, data);
  page.doc.end();
  return finished;
}
