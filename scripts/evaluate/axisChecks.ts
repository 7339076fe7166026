import { readFileSync } from 'node:fs';
import type { AxisCorrection } from '../../src/lib/identity/method';
import { checkWavenumbers, type WavenumberStandard } from '../../src/lib/spectra/axis/wavenumberCheck';
import { signalToNoise } from '../../src/lib/spectra/peaks/noise';
import type { LabelledFile } from './spectraFolder';

const STANDARDS = new URL('../../reference/calibration/standards.json', import.meta.url);

/**
 * The axis correction of each source (instrument) from its own spectrum of a shift standard; where it measured the
 * standard several times, from the one with the best signal.
 * @param standard name of a standard in reference/calibration and of a material among the files
 */
export function axisCorrections(
  files: readonly LabelledFile[],
  standard: string
): ReadonlyMap<string, AxisCorrection> {
  const known = (JSON.parse(readFileSync(STANDARDS, 'utf8')) as WavenumberStandard[]).find(
    (entry) => entry.name === standard
  );
  if (!known) throw new Error(`${standard} is not among the standards of reference/calibration.`);
  const best = new Map<string, LabelledFile>();
  for (const file of files.filter((each) => each.material === standard)) {
    const other = best.get(file.source);
    if (!other || ratio(file) > ratio(other)) best.set(file.source, file);
  }
  return new Map(
    [...best].map(([source, file]) => [source, checkWavenumbers(file.spectrum, known, []).correction])
  );
}

const ratio = (file: LabelledFile): number => signalToNoise(file.spectrum.intensity).ratio;
