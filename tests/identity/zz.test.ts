import { it } from 'vitest';
import { decide } from '$lib/identity/decide';
import { readMaterials } from '../../scripts/demo/materials';
import { asFile, libraryOf, madeMethod, madeScan, requestFor } from '../support/madeMethods';
it('x', () => {
  const mats = readMaterials().filter((m) => m.ramanSuitability === 'suitable');
  const methods = mats.map((m) => madeMethod(m.itemCode));
  const library = libraryOf(methods.map((m) => m.entry));
  const by: Record<string, number> = {};
  const by2: Record<string, number> = {};
  let n = 0, pass = 0;
  for (const [i, m] of mats.entries()) for (let lot = 0; lot < 20; lot++) {
    const scan = madeScan(m.itemCode, { lotSeed: `new ${lot}`, scanSeed: `new ${lot}`, brightness: lot % 2 ? 20000 : 3000 });
    const d = decide(requestFor(methods[i], library, asFile(scan)));
    n++;
    if (d.verdict === 'pass') pass++;
    else { const k = `${m.itemCode} ${lot%2} ${d.verdict} ${d.explanation.decidedBy} ${(d.criteria.find(c=>c.code===d.explanation.decidedBy)?.margin??0).toFixed(1)} r=${d.scores?.correlation.toFixed(4)}`; by[k] = (by[k] ?? 0) + 1; const k2=`${d.verdict} ${d.explanation.decidedBy}`; by2[k2]=(by2[k2]??0)+1; }
  }
  console.log(pass, n, by2, by);
}, 60000);
