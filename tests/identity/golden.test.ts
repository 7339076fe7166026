import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { beforeAll, describe, expect, it } from 'vitest';
import { canonicalJson } from '$lib/identity/canonicalJson';
import { decide, type DecideRequest } from '$lib/identity/decide';
import type { Decision, Scores } from '$lib/identity/decision';
import { ENGINE_VERSION } from '$lib/identity/engineVersion';
import type { Library } from '$lib/identity/method';
import {
  asFile,
  libraryOf,
  madeMethod,
  madeScan,
  requestFor,
  sha256,
  type MadeMethod
} from '../support/madeMethods';
import { goldenCases, type GoldenCase } from '../support/goldenCases';

/**
 * Decisions frozen to the last bit. A score that moves without a raised ENGINE_VERSION fails here: a stored decision
 * could then no longer be replayed. After raising it, UPDATE_GOLDEN=1 writes the file anew; read the difference
 * before committing it.
 */
const FILE = new URL('../../reference/golden/decisions.json', import.meta.url);

interface GoldenRow {
  readonly id: string;
  readonly why: string;
  readonly verdict: string;
  readonly decidedBy: string | null;
  readonly scores: Scores | null;
  /** Of the raw bytes, the method and the whole decision, each in canonical form. */
  readonly rawSha256: string;
  readonly methodSha256: string;
  readonly decisionSha256: string;
}
interface GoldenFile {
  readonly engineVersion: string;
  readonly rows: readonly GoldenRow[];
}

const methods = new Map<string, MadeMethod>();
let library: Library;
let rows: GoldenRow[];
let golden: GoldenFile | null;

const CASES = goldenCases();

beforeAll(() => {
  for (const itemCode of new Set(CASES.map((one) => one.claimed)))
    methods.set(itemCode, madeMethod(itemCode));
  library = libraryOf([...methods.values()].map((made) => made.entry));
  rows = CASES.map(rowOf);
  if (process.env.UPDATE_GOLDEN === '1') {
    const file: GoldenFile = { engineVersion: ENGINE_VERSION, rows };
    writeFileSync(FILE, `${JSON.stringify(file, null, 1)}\n`);
    console.log(`written: ${rows.length} golden decisions of engine ${ENGINE_VERSION}`);
  }
  golden = existsSync(FILE) ? (JSON.parse(readFileSync(FILE, 'utf8')) as GoldenFile) : null;
}, 60_000);

function requestOf({ claimed, scanned, options, more }: GoldenCase): DecideRequest {
  const made = methods.get(claimed) as MadeMethod;
  return requestFor(made, library, asFile(madeScan(scanned, options)), more);
}

function rowOf(one: GoldenCase): GoldenRow {
  const request = requestOf(one);
  const decision: Decision = decide(request);
  return {
    id: one.id,
    why: one.why,
    verdict: decision.verdict,
    decidedBy: decision.explanation.decidedBy,
    scores: decision.scores,
    rawSha256: request.rawSha256,
    methodSha256: request.methodSha256,
    decisionSha256: sha256(canonicalJson(decision))
  };
}

describe('golden decisions', () => {
  it('are of this engine version', () => {
    expect(golden?.engineVersion).toBe(ENGINE_VERSION);
  });

  it('hold every case once, with a reason, and every verdict there is', () => {
    expect(golden?.rows.map((row) => row.id)).toEqual(CASES.map((one) => one.id));
    expect(new Set(CASES.map((one) => one.id)).size).toBe(CASES.length);
    expect(CASES.every((one) => one.why.length > 10)).toBe(true);
    const verdicts = new Set(golden?.rows.map((row) => row.verdict));
    expect([...verdicts].sort()).toEqual(['fail', 'inconclusive', 'invalid', 'pass']);
  });

  it.each(CASES.map((one, i) => [one.id, one, i] as const))(
    'R-071: %s comes out as frozen, to the last bit',
    (_, one, i) => {
      const frozen = golden?.rows[i];
      expect(rows[i].verdict).toBe(one.expected);
      expect(rows[i]).toEqual(frozen);
    }
  );

  it('a score moved in its last bit is another decision', () => {
    const decision = decide(requestOf(CASES[0]));
    const { scores } = decision;
    if (scores === null) throw new Error('the first golden case has scores');
    const moved = { ...decision, scores: { ...scores, correlation: scores.correlation - 2 ** -53 } };
    expect(sha256(canonicalJson(moved))).not.toBe(golden?.rows[0].decisionSha256);
  });
});
