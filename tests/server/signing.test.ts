import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { canonicalJson } from '$lib/identity/canonicalJson';
import type { users } from '$lib/server/db/schema';
import { sessions, signatures, trailEntries } from '$lib/server/db/schema';
import { transact } from '$lib/server/db/transaction';
import type { Act } from '$lib/server/platform/act';
import { systemAct } from '$lib/server/platform/act';
import { oneTimeCode } from '$lib/server/platform/oneTimeCode';
import { sha256Hex } from '$lib/server/platform/rawFiles';
import { touchSession } from '$lib/server/platform/sessions';
import { proveIdentity, sign, type NewSignature, type SignatureProof } from '$lib/server/platform/signing';
import { verifySignature } from '$lib/server/platform/verifySignature';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures, type Person } from '../support/fixtures';

let base: TestDatabase;
let fixtures: Fixtures;

beforeAll(async () => {
  base = await testDatabase();
  fixtures = await makeFixtures(base.db);
});
afterAll(() => base.close());

const claim = { password: PASSWORD, action: 'lot.release' } as const;
const record = { type: 'lot-disposition', lotNumber: 'L-2026-0001', outcome: 'release' };
const input = (recordId: string): NewSignature => ({
  meaning: 'approved',
  recordType: 'lot',
  recordId,
  record,
  reason: 'all passed'
});

async function proofOf(act: Act): Promise<SignatureProof> {
  const proof = await proveIdentity(base.db, act, claim);
  if (!proof.ok) throw new Error(proof.detail);
  return proof.value;
}
const signOnce = async (act: Act, recordId: string) => {
  const proof = await proofOf(act);
  return transact(base.db, (tx) => sign(tx, act, proof, input(recordId)));
};
const entriesAbout = (id: string) =>
  base.db.select().from(trailEntries).where(eq(trailEntries.recordId, id)).orderBy(trailEntries.id);
const newPerson = (name: string, more: Partial<typeof users.$inferInsert> = {}): Promise<Person> =>
  fixtures.addPerson(name, ['approver'], more);

describe('a signature', () => {
  it('R-019: holds the printed name, the role, the time and the meaning', async () => {
    const { act } = fixtures.people.approver;
    const lotId = crypto.randomUUID();
    const made = await signOnce(act, lotId);
    const [row] = await base.db.select().from(signatures).where(eq(signatures.id, made.id));
    expect(row).toMatchObject({
      printedName: 'Person approver',
      role: 'QA approver',
      meaning: 'approved',
      reason: 'all passed',
      recordType: 'lot',
      recordId: lotId
    });
    expect(Math.abs(row.signedAt.getTime() - Date.now())).toBeLessThan(60_000);
    expect(made).toEqual({
      id: row.id,
      sha256: row.recordSha256,
      signedAt: row.signedAt,
      printedName: 'Person approver'
    });
  });

  it('R-023: is bound to the canonical bytes of the whole record, and is on the trail with it', async () => {
    const { act } = fixtures.people.approver;
    const lotId = crypto.randomUUID();
    const made = await signOnce(act, lotId);
    const [row] = await base.db.select().from(signatures).where(eq(signatures.id, made.id));
    expect(new TextDecoder().decode(row.record)).toBe(canonicalJson(record));
    expect(made.sha256).toBe(sha256Hex(row.record));
    const [entry] = await entriesAbout(made.id);
    expect(entry).toMatchObject({
      action: 'signature.make',
      lotId,
      actorName: 'Person approver',
      after: { recordSha256: made.sha256, recordId: lotId, meaning: 'approved' }
    });
    expect(await verifySignature(base.db, made.id)).toMatchObject({ valid: true });
  });

  it('a transaction that is rolled back leaves neither signature nor entry', async () => {
    const { act } = fixtures.people.approver;
    const proof = await proofOf(act);
    const lotId = crypto.randomUUID();
    const failing = transact(base.db, async (tx) => {
      await sign(tx, act, proof, input(lotId));
      throw new Error('power cut');
    });
    await expect(failing).rejects.toThrow('power cut');
    expect(await base.db.select().from(signatures).where(eq(signatures.recordId, lotId))).toHaveLength(0);
    // The same step may run again with it, as when the server asks for the transaction anew.
    expect((await transact(base.db, (tx) => sign(tx, act, proof, input(lotId)))).sha256).toHaveLength(64);
  });
});

describe('R-023: a signature that was tampered with', () => {
  it.each([
    ['moved to another record', `record_id = 'another'`],
    ['given another signer', `printed_name = 'Somebody else'`],
    ['given another meaning', `meaning = 'reviewed'`],
    ['given another time', `signed_at = signed_at + interval '1 microsecond'`],
    ['given another reason', `reason = ''`],
    [
      'over another record with its true hash',
      `record = convert_to('{}', 'UTF8'), record_sha256 = encode(sha256(convert_to('{}', 'UTF8')), 'hex')`
    ]
  ])('%s no longer verifies', async (_what, change) => {
    const made = await signOnce(fixtures.people.approver.act, crypto.randomUUID());
    await base.ownerSql`alter table signatures disable trigger append_only`;
    await base.ownerSql.unsafe(`update signatures set ${change} where id = '${made.id}'`);
    await base.ownerSql`alter table signatures enable always trigger append_only`;
    expect(await verifySignature(base.db, made.id)).toMatchObject({ valid: false });
  });

  it('that was put in by hand is not on the trail, and one that does not exist is none', async () => {
    const { id } = fixtures.people.approver;
    const [forged] = await base.db
      .insert(signatures)
      .values({
        signerId: id,
        printedName: 'Person approver',
        role: 'QA approver',
        meaning: 'approved',
        recordType: 'lot',
        recordId: 'x',
        record: new TextEncoder().encode('{}'),
        recordSha256: sha256Hex(new TextEncoder().encode('{}'))
      })
      .returning();
    expect(await verifySignature(base.db, forged.id)).toMatchObject({
      valid: false,
      sentence: expect.stringContaining('does not tell of this signature')
    });
    expect(await verifySignature(base.db, crypto.randomUUID())).toMatchObject({ valid: false });
  });
});

describe('R-021, R-022: proof of identity', () => {
  it('a session alone does not sign: the password is asked for at every signing', async () => {
    const { act } = await newPerson('no-password');
    expect(await proveIdentity(base.db, act, { ...claim, password: '' })).toMatchObject({
      ok: false,
      code: 'signature-wrong'
    });
  });

  it('a proof is good for one signature', async () => {
    const { act } = fixtures.people.approver;
    const proof = await proofOf(act);
    const lotId = crypto.randomUUID();
    await transact(base.db, (tx) => sign(tx, act, proof, input(lotId)));
    await expect(transact(base.db, (tx) => sign(tx, act, proof, input(lotId)))).rejects.toThrow();
    await expect(transact(base.db, (tx) => sign(tx, act, proof, input(crypto.randomUUID())))).rejects.toThrow(
      'second record'
    );
    expect(await base.db.select().from(signatures).where(eq(signatures.recordId, lotId))).toHaveLength(1);
  });

  it('a proof is good for its own person and session, and cannot be made by hand', async () => {
    const { act } = fixtures.people.approver;
    const other = await newPerson('another-approver');
    const proof = await proofOf(act);
    const attempt = (by: Act, with_: SignatureProof) =>
      transact(base.db, (tx) => sign(tx, by, with_, input(crypto.randomUUID())));
    await expect(attempt(other.act, proof)).rejects.toThrow('another person or session');
    await expect(attempt({ ...act, sessionKey: 'another' }, proof)).rejects.toThrow(
      'another person or session'
    );
    await expect(attempt(act, {} as SignatureProof)).rejects.toThrow('without a proof');
  });

  it('a proof is good for two minutes', async () => {
    const { act } = fixtures.people.approver;
    const proof = await proofOf(act);
    const now = performance.now();
    const clock = vi.spyOn(performance, 'now').mockReturnValue(now + 121_000);
    try {
      await expect(
        transact(base.db, (tx) => sign(tx, act, proof, input(crypto.randomUUID())))
      ).rejects.toThrow('older than two minutes');
    } finally {
      clock.mockRestore();
    }
  });

  it('a role without the right, and a service, prove nothing', async () => {
    expect(await proveIdentity(base.db, fixtures.people.operator.act, claim)).toMatchObject({
      ok: false,
      code: 'not-allowed'
    });
    expect(await proveIdentity(base.db, systemAct('A service'), claim)).toMatchObject({
      ok: false,
      code: 'not-allowed'
    });
  });

  it.each([
    ['R-002', 'without a recorded proof of identity', { proofedAt: null }],
    ['R-017', 'without an accepted statement of accountability', { statementAcceptedAt: null }],
    ['R-006', 'of a suspended account', { status: 'suspended' as const }]
  ])('%s: an approver %s does not sign, even with the right password', async (rule, _what, more) => {
    const { act, id } = await newPerson(`barred-${rule}`, more);
    expect(await proveIdentity(base.db, act, claim)).toMatchObject({
      ok: false,
      code: 'not-allowed',
      detail: expect.stringContaining('Nothing was signed')
    });
    expect((await entriesAbout(id)).map((entry) => entry.action)).toEqual(['signature.refused']);
  });
});

describe('R-021: wrong passwords at a signature', () => {
  it('are on the trail, and the third ends the session', async () => {
    const person = await newPerson('forgetful');
    const wrong = () => proveIdentity(base.db, person.act, { ...claim, password: 'not this one at all' });
    expect(await wrong()).toMatchObject({ ok: false, code: 'signature-wrong' });
    expect(await wrong()).toMatchObject({ ok: false, code: 'signature-wrong' });
    expect(await touchSession(base.db, person.token)).not.toBeNull();
    expect(await wrong()).toMatchObject({
      ok: false,
      code: 'not-signed-in',
      detail: expect.stringContaining('signed out')
    });
    expect(await touchSession(base.db, person.token)).toBeNull();
    expect((await entriesAbout(person.id)).map((entry) => entry.action)).toEqual([
      'signature.refused',
      'signature.refused',
      'signature.refused',
      'session.revoked'
    ]);
  });

  it('begin to count anew after a right one', async () => {
    const person = await newPerson('hasty');
    const wrong = () => proveIdentity(base.db, person.act, { ...claim, password: 'not this one at all' });
    for (let round = 0; round < 3; round += 1) {
      await wrong();
      await wrong();
      await proofOf(person.act);
    }
    const [row] = await base.db.select().from(sessions).where(eq(sessions.userId, person.id));
    expect(row).toMatchObject({ failedSignatures: 0, revokedAt: null });
  });
});

describe('one-time codes', () => {
  const SECRET = 'GEZDGNBVGY3TQOJQGEZDGNBVGY3TQOJQ';

  it('are those of RFC 6238, appendix B, for SHA-1 (last six of the eight digits)', () => {
    const vectors: [number, string][] = [
      [59, '287082'],
      [1111111109, '081804'],
      [1111111111, '050471'],
      [1234567890, '005924'],
      [2000000000, '279037'],
      [20000000000, '353130']
    ];
    for (const [seconds, code] of vectors) expect(oneTimeCode(SECRET, Math.floor(seconds / 30))).toBe(code);
  });

  it('are asked for where one is enrolled, and each works once', async () => {
    const { act } = await newPerson('enrolled', { oneTimeCodeSecret: SECRET });
    const step = Math.floor(Date.now() / 30_000);
    const attempt = (code?: string) => proveIdentity(base.db, act, { ...claim, oneTimeCode: code });
    expect(await attempt()).toMatchObject({ ok: false, code: 'signature-wrong' });
    expect(await attempt(oneTimeCode(SECRET, step - 40))).toMatchObject({ ok: false });
    await base.ownerSql`update sessions set failed_signatures = 0`;
    const both = await Promise.all([attempt(oneTimeCode(SECRET, step)), attempt(oneTimeCode(SECRET, step))]);
    expect(both.filter((outcome) => outcome.ok)).toHaveLength(1);
    expect(await attempt(oneTimeCode(SECRET, step))).toMatchObject({ ok: false });
  });
});

describe('canonical JSON, RFC 8785', () => {
  it('sorts members by UTF-16 code units, as the example of its section 3.2.3 (from memory)', () => {
    const example = {
      '\u20ac': 'Euro Sign',
      '\r': 'Carriage Return',
      '\ufb33': 'Hebrew Letter Dalet With Dagesh',
      '1': 'One',
      '\ud83d\ude00': 'Emoji: Grinning Face',
      '\u0080': 'Control',
      '\u00f6': 'Latin Small Letter O With Diaeresis'
    };
    const values = [...canonicalJson(example).matchAll(/:"([^"]*)"/g)].map((match) => match[1]);
    expect(values).toEqual([
      'Carriage Return',
      'One',
      'Control',
      'Latin Small Letter O With Diaeresis',
      'Euro Sign',
      'Emoji: Grinning Face',
      'Hebrew Letter Dalet With Dagesh'
    ]);
  });
});
