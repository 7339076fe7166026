import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { drumFile, type DrumScan } from './drumFile';
import type { MadeLot } from './makeDeliveries';
import { readMaterials, readPolystyrene } from './materials';
import { INSTRUMENTS } from './scenario';
import { synthesise, toDelimitedText } from './synthesise';

/** Spectra that something is wrong with, for a visitor to scan in place of a container's own. */
const TRICKY: readonly (DrumScan & {
  readonly itemCode: string;
  readonly name: string;
  readonly what: string;
})[] = [
  {
    itemCode: 'SOR',
    name: 'wrong-material-sorbitol',
    container: 1,
    what: 'sorbitol, for any other material'
  },
  {
    itemCode: 'GLY',
    truth: 'DEG',
    name: 'diethylene-glycol',
    container: 1,
    what: 'diethylene glycol, for a drum of glycerol: the substitution that has killed'
  },
  { itemCode: 'PAR', brightness: 250, name: 'paracetamol-too-faint', container: 1, what: 'hardly any light' },
  {
    itemCode: 'PAR',
    brightness: 400_000,
    name: 'paracetamol-saturated',
    container: 1,
    what: 'too much light'
  },
  { itemCode: 'PAR', linerShare: 0.97, name: 'liner-only', container: 1, what: 'almost only the liner' },
  {
    itemCode: 'PAR',
    instrument: 'RM-3',
    name: 'paracetamol-1064-nm',
    container: 1,
    what: 'paracetamol on RM-3, whose laser the methods are not made for'
  }
];

/**
 * Writes spectra for a visitor to scan: one file for each container that waits, named by its code, some that should
 * not pass, and polystyrene for each instrument's performance check.
 */
export function writeSamples(folder: string, lots: readonly MadeLot[]): void {
  mkdirSync(folder, { recursive: true });
  const write = (name: string, bytes: string | Uint8Array) => writeFileSync(join(folder, name), bytes);
  const withBands = new Set(
    readMaterials().flatMap(({ itemCode, bands }) => (bands.length > 0 ? [itemCode] : []))
  );
  for (const lot of lots.filter(({ itemCode }) => withBands.has(itemCode))) {
    for (const { number, barcode, status } of lot.containers) {
      if (status !== 'awaiting') continue;
      const name = `${lot.lotNumber}-container-${number}-${barcode.replace('*', '_')}.csv`;
      write(name, drumFile(lot.itemCode, lot.batch, { container: number }, name).bytes);
    }
  }
  for (const { itemCode, name, ...scan } of TRICKY)
    write(`${name}.csv`, drumFile(itemCode, 'sample', scan, `${name}.csv`).bytes);
  for (const instrument of INSTRUMENTS) {
    const spectrum = synthesise(readPolystyrene(), instrument, {
      lotSeed: 'PS-04',
      scanSeed: `${instrument.name} sample`,
      brightness: 40_000,
      fluorescence: 0.1,
      linerShare: 0
    });
    write(
      `polystyrene-${instrument.name}.csv`,
      toDelimitedText(spectrum, instrument, 'polystyrene standard PS-04')
    );
  }
  write('README.txt', readMe());
}

const readMe = (): string =>
  [
    'DEMO: invented data, synthesised from published band positions.',
    '',
    'LOT-container-N-CODE.csv   what is in that container: scan CODE in the bay and give it this file',
    'polystyrene-RM-n.csv       for the performance check of that instrument',
    ...TRICKY.map(({ name, what }) => `${`${name}.csv`.padEnd(26)} ${what}`),
    ''
  ].join('\n');
