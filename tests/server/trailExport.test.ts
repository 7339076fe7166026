import { execFile } from 'node:child_process';
import { copyFileSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { sql, type SQL } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { inclusionProof, verifyInclusion } from '$lib/domain/merkleTree';
import { fullSubtrees, inclusionRanges } from '$lib/domain/treeRanges';
import { trailLeaves } from '$lib/server/db/schema';
import { systemAct } from '$lib/server/platform/act';
import { hex, latestHead, sealNow, sha256 } from '$lib/server/platform/sealer';
import { recordTrail } from '$lib/server/platform/trail';
import { exportTrail, trailExportStream } from '$lib/server/platform/trailExport';
import { inclusionProofs } from '$lib/server/platform/trailProofs';
import { verifyExport } from '../../scripts/verify-trail.mjs';
import { testDatabase, type TestDatabase } from '../support/database';

const SCRIPT = join(dirname(dirname(dirname(fileURLToPath(import.meta.url)))), 'scripts', 'verify-trail.mjs');
let base: TestDatabase;
let folder: string;
let headsFile: string;

const note = (n: number) =>
  recordTrail(base.db, systemAct('Test of the export'), {
    action: n % 3 === 0 ? 'lot.release' : 'scan.record',
    recordType: 'lot',
    recordId: String(n),
    recordLabel: `Lot "${n}" of Ærø\n`,
    after: { drums: n, share: 0.1 }
  });

beforeAll(async () => {
  base = await testDatabase();
  folder = mkdtempSync(join(tmpdir(), 'wharfinger-export-'));
  headsFile = join(folder, 'heads.ndjson');
  for (let n = 0; n < 13; n += 1) {
    await note(n);
    if (n === 4) await sealNow(base.db, { headsFile });
  }
});
afterAll(async () => {
  await base.close();
  rmSync(folder, { recursive: true });
});

async function exported(where?: SQL): Promise<string> {
  let text = '';
  for await (const line of exportTrail(base.db, { headsFile, where })) text += line;
  return text;
}
const releases = sql`action = 'lot.release'`;
const linesOf = (text: string) => text.split('\n').slice(0, text.endsWith('\n') ? -1 : undefined);
const check = (text: string, options = {}) => verifyExport(linesOf(text), options);

function run(...words: string[]): Promise<{ code: number; output: string }> {
  return new Promise((resolve) => {
    execFile(process.execPath, [SCRIPT, ...words], { env: {}, cwd: folder }, (error, stdout, stderr) => {
      resolve({ code: error ? Number(error.code) : 0, output: stdout + stderr });
    });
  });
}

describe('R-040: an exported trail', () => {
  it('whole and chosen exports verify, with the counts that the database has', async () => {
    expect(await check(await exported())).toMatchObject({
      ok: true,
      scope: 'whole',
      entries: 13,
      faults: []
    });
    expect(await check(await exported(releases))).toMatchObject({ ok: true, scope: 'selection', entries: 5 });
    expect(await check(await exported(sql`false`))).toMatchObject({ ok: true, entries: 0 });
  });

  it('verifies away from everything, by a copy of the one script', async () => {
    const alone = join(folder, 'verify-trail.mjs');
    copyFileSync(SCRIPT, alone);
    const file = join(folder, 'trail.ndjson');
    writeFileSync(file, await exported());
    const { code, output } = await run(file, '--heads', headsFile, '--list');
    expect([code, output]).toEqual([0, expect.stringContaining('RIGHT: all 13 entries')]);
    expect(output).toContain('lot.release');
    expect(readFileSync(alone, 'utf8')).not.toMatch(/from '(?!node:)/);
  });

  it('one changed entry is found by the script and named', async () => {
    const file = join(folder, 'changed.ndjson');
    writeFileSync(file, (await exported(releases)).replace('\\"drums\\": 6', '\\"drums\\": 7'));
    const { code, output } = await run(file);
    expect(code).toBe(1);
    expect(output).toContain('NOT RIGHT: Entry 7 was changed');
  });

  it('what is no export is told so', async () => {
    const file = join(folder, 'nothing.ndjson');
    writeFileSync(file, '');
    expect(await run(file)).toMatchObject({ code: 1, output: expect.stringContaining('empty') });
    expect((await run(join(folder, 'absent.ndjson'))).code).toBe(2);
    expect((await run()).code).toBe(2);
    expect(await check('{"kind":"something else"}\n')).toMatchObject({ ok: false });
  });

  it.each([
    ['whole', undefined],
    ['chosen', releases]
  ])('every byte of a %s export matters', async (_scope, where) => {
    const bytes = Buffer.from(await exported(where));
    const missed: number[] = [];
    for (let at = 0; at < bytes.length; at += 1) {
      const flipped = Buffer.from(bytes);
      flipped[at] ^= 0x01;
      if ((await check(flipped.toString('utf8'))).ok) missed.push(at);
    }
    // The last line feed is no part of a line.
    expect(missed.filter((at) => at !== bytes.length - 1)).toEqual([]);
  });

  it.each([
    ['whole', undefined],
    ['chosen', releases]
  ])(
    'every shorter beginning of a %s export is refused, and so are lines dropped, doubled and exchanged',
    async (_scope, where) => {
      const lines = linesOf(await exported(where));
      for (let count = 0; count < lines.length; count += 1)
        expect((await verifyExport(lines.slice(0, count))).ok).toBe(false);
      for (let at = 0; at < lines.length; at += 1) {
        expect((await verifyExport(lines.toSpliced(at, 1))).ok).toBe(false);
        expect((await verifyExport(lines.toSpliced(at, 0, lines[at]))).ok).toBe(false);
        if (at > 0)
          expect((await verifyExport(lines.with(at, lines[at - 1]).with(at - 1, lines[at]))).ok).toBe(false);
      }
    }
  );

  it("a forged trail under a key of the forger's own is found with the true key, or with heads kept elsewhere", async () => {
    const text = await exported();
    const heads = readFileSync(headsFile, 'utf8')
      .trim()
      .split('\n')
      .map((line) => JSON.parse(line));
    const forged = await forge(text);
    expect((await check(forged)).ok).toBe(true);
    expect((await check(forged, { key: heads[0].publicKey })).faults[0]).toContain('another key');
    expect((await check(forged, { heads })).faults[0]).toContain('not those of the tree head kept elsewhere');
  });

  it('an export that leaves the newest entries out is found with heads kept elsewhere', async () => {
    await sealNow(base.db, { headsFile });
    const heads = readFileSync(headsFile, 'utf8')
      .trim()
      .split('\n')
      .map((line) => JSON.parse(line));
    const longer = { ...heads.at(-1), size: 20 };
    expect((await check(await exported(), { heads: [{ ...longer, publicKey: null }] })).faults[0]).toContain(
      'the end is missing'
    );
  });

  it('comes as a stream of the same bytes', async () => {
    expect(await new Response(trailExportStream(base.db, { headsFile })).text()).toBe(await exported());
  });

  /** The same export with one entry rewritten, and tree, signature and digest made anew with another key. */
  async function forge(text: string): Promise<string> {
    const { createHash, generateKeyPairSync } = await import('node:crypto');
    const { treeRoot, leafHash } = await import('$lib/domain/merkleTree');
    const { trailKeyFrom } = await import('$lib/server/platform/trailKey');
    const own = trailKeyFrom(generateKeyPairSync('ed25519').privateKey);
    const values = linesOf(text).map((line) => JSON.parse(line));
    const entries = values.slice(1, -1);
    entries[2].content = entries[2].content.replace('"drums": 2', '"drums": 3');
    const root = treeRoot(
      sha256,
      entries.map((entry) => leafHash(sha256, Buffer.from(entry.content)))
    );
    const head = {
      ...own.signHead(entries.length, hex(root), new Date(0).toISOString()),
      publicKey: own.publicKey
    };
    const body = [{ ...values[0], head }, ...entries].map((value) => `${JSON.stringify(value)}\n`).join('');
    const end = {
      kind: 'end',
      entries: entries.length,
      sha256: createHash('sha256').update(body).digest('hex')
    };
    return `${body}${JSON.stringify(end)}\n`;
  }
});

describe('proofs from stored hashes', () => {
  it('are the proofs of the definition, for every entry', async () => {
    const head = await latestHead(base.db);
    const rows = await base.db.select().from(trailLeaves).orderBy(trailLeaves.leafIndex);
    const leaves = rows.map((row) => Buffer.from(row.leafHash, 'hex'));
    const indices = rows.map((row) => row.leafIndex);
    const proofs = await inclusionProofs(base.db, indices, leaves.length);
    for (const index of indices) {
      expect(proofs[index].map(hex)).toEqual(inclusionProof(sha256, leaves, index).map(hex));
      expect(
        verifyInclusion(
          sha256,
          leaves[index],
          index,
          leaves.length,
          proofs[index],
          Buffer.from(String(head?.rootHash), 'hex')
        )
      ).toBe(true);
    }
  });

  it('ask for full subtrees only', () => {
    expect(inclusionRanges(5, 7)).toEqual([
      { from: 4, to: 5 },
      { from: 6, to: 7 },
      { from: 0, to: 4 }
    ]);
    expect(fullSubtrees({ from: 4, to: 7 })).toEqual([
      { height: 1, index: 2 },
      { height: 0, index: 6 }
    ]);
    expect(() => inclusionRanges(7, 7)).toThrow(RangeError);
  });
});
