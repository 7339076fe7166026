import type { DemoScan } from './deliveries';
import { readLiner, readMaterials, readOthers } from './materials';
import { INSTRUMENTS } from './scenario';
import { synthesise, toDelimitedText } from './synthesise';

export const textFile = (fileName: string, text: string) => ({
  fileName,
  mediaType: 'text/plain',
  bytes: new TextEncoder().encode(text)
});

/** Most counts of one frame: 16 bits. */
const FRAME_CEILING = 65_535;

export type DrumScan = Partial<Omit<DemoScan, 'do' | 'verdict'>> & { readonly container: number };

/** What an instrument sees in a drum: the lot's own material unless something else is in it. */
export function drumFile(itemCode: string, batch: string, scan: DrumScan, fileName: string) {
  const truth = [...readMaterials(), ...readOthers()].find(
    (material) => material.itemCode === (scan.truth ?? itemCode)
  );
  const instrument = INSTRUMENTS.find(({ name }) => name === (scan.instrument ?? 'RM-1'));
  if (!truth || !instrument)
    throw new Error(`the demo has no ${scan.truth ?? itemCode} or no such instrument`);
  const lotSeed = `${itemCode} ${batch}`;
  const spectrum = synthesise(truth.bands, instrument, {
    lotSeed,
    scanSeed: `${lotSeed} drum ${scan.container} ${scan.repeatReason ?? ''}`.trim(),
    fluorescence: scan.fluorescence ?? truth.fluorescence,
    liner: readLiner(),
    linerShare: scan.linerShare ?? 0.02,
    brightness: scan.brightness ?? 20_000,
    ceiling: FRAME_CEILING * (scan.exposure?.accumulations ?? 1)
  });
  const title = `container ${scan.container}`;
  return textFile(fileName, toDelimitedText(spectrum, instrument, title, scan.exposure));
}
