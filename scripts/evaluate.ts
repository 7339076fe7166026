/**
 * How well the engine tells materials apart on spectra of your own:
 *
 *   npm run evaluate -- FOLDER [--flat] [--check polystyrene] [--same A,B] [--json FILE]
 *   npm run evaluate -- --train FOLDER --test FOLDER [--check polystyrene] [--json FILE]
 *
 * FOLDER holds material/source/file (.csv .txt .jdx .dx); a file directly under material/ is a source of its own. With
 * --flat each file directly under FOLDER is a material of its own. --check corrects the axis of each instrument (the
 * file name up to "_") by its own spectrum of a standard. --same says that folders hold one substance.
 */
import { writeFileSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { axisChecks, correctionFor } from './evaluate/axisChecks';
import { figuresOf } from './evaluate/figures';
import { leaveSourceOut, trainAndTest } from './evaluate/leaveOut';
import { merged, readFolder, type FolderContent } from './evaluate/readFolder';
import { reportOf } from './evaluate/report';

const USAGE =
  'Name a folder: npm run evaluate -- FOLDER [--flat] [--check polystyrene] [--same A,B] [--json FILE], or --train FOLDER --test FOLDER.';

function main(): number {
  const { values, positionals } = parseArgs({
    allowPositionals: true,
    options: {
      flat: { type: 'boolean', default: false },
      check: { type: 'string' },
      same: { type: 'string', multiple: true, default: [] },
      json: { type: 'string' },
      train: { type: 'string' },
      test: { type: 'string' }
    }
  });
  const groups = values.same.map((list) => list.split(','));
  const load = (folder: string): FolderContent => {
    const content = readFolder(folder, values.flat);
    content.unread.forEach((line) => console.log(`not read: ${line}`));
    return { ...content, spectra: merged(content.spectra, groups) };
  };
  const [folder] = positionals;
  const pair = values.train !== undefined && values.test !== undefined;
  if (!pair && folder === undefined) {
    console.error(USAGE);
    return 2;
  }
  const training = load(values.train ?? folder).spectra;
  const testing = pair ? load(values.test as string).spectra : training;
  const checks = values.check ? axisChecks([...training, ...(pair ? testing : [])], values.check) : [];
  for (const { file, pass, correction } of checks)
    console.log(
      `axis of ${file}: ${pass ? 'within' : 'outside'} the handheld tolerances, corrected by ${correction.shiftCm1.toFixed(2)} cm-1 and ${(1e6 * correction.scale).toFixed(0)} ppm`
    );
  const correct = (entry: (typeof training)[number]) => correctionFor(entry, checks);
  const trials = pair ? trainAndTest(training, testing, correct) : leaveSourceOut(training, correct);
  const figures = figuresOf(trials);
  const materials = new Set(training.map((entry) => entry.material)).size;
  console.log(reportOf(`${training.length} spectra of ${materials} materials`, figures));
  if (values.json) writeFileSync(values.json, `${JSON.stringify(figures, null, 2)}\n`);
  return 0;
}

process.exitCode = main();
