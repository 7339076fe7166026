import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { drumFile, type MadeLot } from './makeDeliveries';
import { DELIVERIES, INSTRUMENTS } from './scenario';
import { readPolystyrene } from './materials';
import { synthesise, toDelimitedText } from './synthesise';

/**
 * Writes spectra for a visitor to scan: one file for each container that waits, named by its code, a wrong material,
 * and polystyrene for each instrument's performance check.
 */
export function writeSamples(folder: string, lots: readonly MadeLot[]): void {
  mkdirSync(folder, { recursive: true });
  const batches = DELIVERIES.flatMap((delivery) => delivery.lots);
  lots.forEach((lot, i) => {
    if (lot.itemCode === 'NAC') return;
    lot.barcodes.forEach((barcode, index) => {
      const container = index + 1;
      if (lot.scanned.includes(container)) return;
      const name = `${lot.lotNumber}-container-${container}-${barcode.replace('*', '_')}.csv`;
      writeFileSync(join(folder, name), drumFile(lot.itemCode, batches[i].batch, { container }, name).bytes);
    });
  });
  const wrong = 'wrong-material-sorbitol.csv';
  writeFileSync(join(folder, wrong), drumFile('SOR', 'sample', { container: 1 }, wrong).bytes);
  for (const instrument of INSTRUMENTS) {
    const spectrum = synthesise(readPolystyrene(), instrument, {
      lotSeed: 'PS-04',
      scanSeed: `${instrument.name} sample`,
      brightness: 40_000,
      fluorescence: 0.1,
      linerShare: 0
    });
    writeFileSync(
      join(folder, `polystyrene-${instrument.name}.csv`),
      toDelimitedText(spectrum, instrument, 'polystyrene standard PS-04')
    );
  }
}
