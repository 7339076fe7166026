/**
 * How well identity holds on a folder of labelled spectra: builds each material's method as the product suggests it,
 * leaving one source out at a time, and decides every spectrum left out under its own and every other material.
 *   npm run evaluate -- FOLDER [--flat] [--check polystyrene] [--same A=B] [--liner] [--json FILE]
 *   npm run evaluate -- --train FOLDER --test FOLDER
 */
import { writeFileSync } from 'node:fs';
import { axisCorrections } from './evaluate/axisChecks';
import { figuresOf } from './evaluate/figures';
import { leaveOneSourceOut, trainAndTest } from './evaluate/folds';
import { reportLines } from './evaluate/report';
import { readSpectraFolder, type SpectraFolder } from './evaluate/spectraFolder';
import { runTrials } from './evaluate/trials';
import { helpText, readFlags } from './lib/flags.mjs';
import { PlainStop } from './lib/plainStop.mjs';

const FLAGS = [
  { name: 'flat', about: 'each file of the folder is a material named after it' },
  {
    name: 'check',
    takes: 'STANDARD',
    about: "correct each source's axis from its own spectrum of this standard"
  },
  { name: 'same', takes: 'A=B', about: 'two names of one substance: B counts as A' },
  { name: 'liner', about: 'samples were scanned through a liner: C-H stretching bands do not count' },
  { name: 'train', takes: 'FOLDER', about: 'build methods from this folder (with --test)' },
  { name: 'test', takes: 'FOLDER', about: 'decide the spectra of this folder' },
  { name: 'json', takes: 'FILE', about: 'write figures and every trial to this file' },
  { name: 'help', short: 'h', about: 'this text' }
];

function main(words: readonly string[]): void {
  const folder = words[0] !== undefined && !words[0].startsWith('-') ? words[0] : undefined;
  const flags = readFlags(folder === undefined ? words : words.slice(1), FLAGS);
  if (flags.help) {
    console.log(
      helpText(
        'npm run evaluate -- FOLDER',
        'How well identity holds on a folder of labelled spectra.',
        FLAGS
      )
    );
    return;
  }
  const read = (from: string | true | undefined) => readNamed(from, flags.flat === true, flags.same);
  const trained = read(flags.train ?? folder);
  const tested = typeof flags.test === 'string' ? read(flags.test) : null;
  const folds = tested ? trainAndTest(trained.files, tested.files) : leaveOneSourceOut(trained.files);
  const all = [...trained.files, ...(tested?.files ?? [])];
  const corrections = typeof flags.check === 'string' ? axisCorrections(all, flags.check) : undefined;
  for (const reason of [...trained.unread, ...(tested?.unread ?? [])]) console.log(`passed over   ${reason}`);
  const trials = runTrials(folds, {
    corrections,
    bare: flags.liner !== true
  });
  const figures = figuresOf(trials);
  for (const line of reportLines(figures)) console.log(line);
  if (typeof flags.json === 'string')
    writeFileSync(flags.json, `${JSON.stringify({ figures, trials }, null, 2)}\n`);
}

function readNamed(folder: string | true | undefined, flat: boolean, same?: string | true): SpectraFolder {
  if (typeof folder !== 'string') throw new PlainStop('Name the folder: npm run evaluate -- FOLDER', 2);
  const read = readSpectraFolder(folder, flat);
  if (typeof same !== 'string') return read;
  const [kept, merged] = same.split('=');
  const files = read.files.map((file) => (file.material === merged ? { ...file, material: kept } : file));
  return { ...read, files };
}

try {
  main(process.argv.slice(2));
} catch (error) {
  if (!(error instanceof PlainStop)) throw error;
  console.error(error.message);
  process.exitCode = 2;
}
