import { and, eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Action } from '$lib/domain/roles';
import type { SignatureMeaning } from '$lib/domain/signatures';
import type { Executor, Transaction } from '$lib/server/db/client';
import {
  dispositions,
  lots,
  methodVersionReferences,
  methodVersions,
  referenceSpectra,
  repeatRequests,
  roleGrants
} from '$lib/server/db/schema';
import { transact } from '$lib/server/db/transaction';
import { proveIdentity, sign } from '$lib/server/platform/signing';
import { migrateDatabase } from '../../scripts/migrate';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures, type Person } from '../support/fixtures';
import { makeDraft, makeLot, makePlant, makeScan, someBundle, type Plant } from '../support/recordFixtures';

/** The rules that the database itself keeps, tried as the application's role and around its code. */
let base: TestDatabase;
let fixtures: Fixtures;
let plant: Plant;

beforeAll(async () => {
  base = await testDatabase();
  fixtures = await makeFixtures(base.db);
  plant = await makePlant(base.db, fixtures.siteId, fixtures.people.operator);
});
afterAll(() => base.close());

/** What the database said against it, or `kept`. */
async function answerTo(running: PromiseLike<unknown>): Promise<string> {
  try {
    await running;
    return 'kept';
  } catch (error) {
    return error instanceof Error && error.cause instanceof Error ? error.cause.message : String(error);
  }
}

async function signature(
  tx: Transaction,
  by: Person,
  action: Action,
  meaning: SignatureMeaning,
  recordType: string,
  recordId: string
) {
  const proof = await proveIdentity(base.db, by.act, { password: PASSWORD, action });
  if (!proof.ok) throw new Error(proof.detail);
  return sign(tx, by.act, proof.value, {
    meaning,
    recordType,
    recordId,
    record: { type: recordType, id: recordId }
  });
}

async function submitted(version = 1) {
  const draft = await makeDraft(base.db, plant, fixtures.people.method_owner, version);
  await transact(base.db, async (tx) => {
    const signed = await signature(
      tx,
      fixtures.people.method_owner,
      'method.submit',
      'authored',
      'method-version',
      draft.id
    );
    await tx
      .update(methodVersions)
      .set({
        status: 'in_review',
        ...someBundle(),
        authorSignatureId: signed.id,
        submittedAt: signed.signedAt
      })
      .where(eq(methodVersions.id, draft.id));
  });
  return draft.id;
}

async function effective(version = 1) {
  const id = await submitted(version);
  await transact(base.db, async (tx) => {
    const { approver } = fixtures.people;
    const signed = await signature(tx, approver, 'method.approve', 'approved', 'method-version', id);
    await tx
      .update(methodVersions)
      .set({
        status: 'effective',
        approverId: approver.id,
        approverSignatureId: signed.id,
        effectiveAt: signed.signedAt
      })
      .where(eq(methodVersions.id, id));
  });
  return id;
}

const change = (id: string, values: Partial<typeof methodVersions.$inferInsert>, db: Executor = base.db) =>
  answerTo(db.update(methodVersions).set(values).where(eq(methodVersions.id, id)));
const end = (id: string) =>
  change(id, { status: 'superseded', endedAt: new Date(), endReason: 'a test ends' });

describe('migrations', () => {
  it('running them again changes nothing', async () => {
    const count = () => base.ownerSql`select count(*)::int as n from drizzle.__drizzle_migrations`;
    const [before] = await count();
    await migrateDatabase(base.ownerUrl, 'wharfinger-test');
    expect((await count())[0]).toEqual(before);
  });

  it("the tables are those that the application's schema declares", async () => {
    const schema = await import('$lib/server/db/schema');
    const { getTableConfig, PgTable } = await import('drizzle-orm/pg-core');
    const declared = Object.values(schema)
      .filter((value) => value instanceof PgTable)
      .map((table) => getTableConfig(table).name);
    const rows = await base.ownerSql<
      { name: string }[]
    >`select tablename as name from pg_tables where schemaname = 'public'`;
    expect(rows.map((row) => row.name).sort()).toEqual(declared.sort());
  });

  it('a password that would end the statement is refused before anything is done', async () => {
    await expect(migrateDatabase(base.ownerUrl, `x'; drop table lots; --`)).rejects.toThrow('visible ASCII');
  });
});

describe('method versions', () => {
  it('begin as drafts', async () => {
    const inserting = base.db.insert(methodVersions).values({
      methodId: plant.methodId,
      version: 90,
      status: 'effective',
      definition: {} as never,
      ...someBundle(),
      authorId: fixtures.people.method_owner.id,
      authorName: 'Author',
      approverId: fixtures.people.approver.id,
      effectiveAt: new Date()
    });
    expect(await answerTo(inserting)).toContain('begins as a draft');
  });

  it("go to review only under the author's own signature, and keep a bundle with its true hash", async () => {
    const draft = await makeDraft(base.db, plant, fixtures.people.method_owner, 91);
    expect(await change(draft.id, { status: 'in_review', ...someBundle() })).toContain("author's signature");
    expect(await change(draft.id, { ...someBundle(), bundleSha256: 'f'.repeat(64) })).toContain(
      'method_versions_bundle_hash_true'
    );
    expect(await change(draft.id, { status: 'effective', ...someBundle() })).toContain(
      'does not go from draft to effective'
    );
  });

  it("R-025: become effective only under another person's signature of that version", async () => {
    const id = await submitted(92);
    const { approver } = fixtures.people;
    const now = { status: 'effective', approverId: approver.id, effectiveAt: new Date() } as const;
    expect(await change(id, now)).toContain("another person's signature");
    const foreign = await transact(base.db, (tx) =>
      signature(tx, approver, 'method.approve', 'approved', 'method-version', crypto.randomUUID())
    );
    expect(await change(id, { ...now, approverSignatureId: foreign.id })).toContain(
      "another person's signature"
    );
    const both = await fixtures.addPerson('author-and-approver', ['method_owner', 'approver']);
    const own = await makeDraft(base.db, plant, both, 93);
    await transact(base.db, async (tx) => {
      const signed = await signature(tx, both, 'method.submit', 'authored', 'method-version', own.id);
      await tx
        .update(methodVersions)
        .set({ status: 'in_review', ...someBundle(), authorSignatureId: signed.id })
        .where(eq(methodVersions.id, own.id));
    });
    const selfApproval = transact(base.db, async (tx) => {
      const signed = await signature(tx, both, 'method.approve', 'approved', 'method-version', own.id);
      await tx
        .update(methodVersions)
        .set({ ...now, approverId: both.id, approverSignatureId: signed.id })
        .where(eq(methodVersions.id, own.id));
    });
    expect(await answerTo(selfApproval)).not.toBe('kept');
  });

  it('in review do not change', async () => {
    const id = await submitted(94);
    expect(await change(id, someBundle('another bundle'))).toContain('in review does not change');
    expect(await change(id, { intendedUse: 'something else' })).toContain('in review does not change');
    expect(await change(id, { status: 'draft', bundle: null, bundleSha256: null })).toBe('kept');
  });

  it('once effective never change, by anybody, but end once', async () => {
    const id = await effective(1);
    for (const values of [
      someBundle('other'),
      { intendedUse: 'other' },
      { changeReason: 'other' },
      { effectiveAt: new Date(0) },
      { approverId: null },
      { endReason: 'not ended' }
    ]) {
      expect(await change(id, values as Partial<typeof methodVersions.$inferInsert>)).toContain(
        'never changes'
      );
    }
    await expect(
      base.ownerSql`update method_versions set definition = '{"a": 1}' where id = ${id}`
    ).rejects.toThrow('never changes');
    expect(await change(id, { status: 'draft' })).toContain('does not go from effective to draft');
    expect(await end(id)).toBe('kept');
    expect(await change(id, { endReason: 'another reason' })).toContain('never changes');
    expect(await change(id, { status: 'effective' })).toContain('does not go from superseded to effective');
  });

  it('keep the references they stand on, and those keep their spectrum', async () => {
    const id = await effective(2);
    const removing = base.db
      .delete(methodVersionReferences)
      .where(and(eq(methodVersionReferences.methodVersionId, id)));
    expect(await answerTo(removing)).toContain('only while it is a draft');
    const reject = () =>
      answerTo(
        base.db
          .update(referenceSpectra)
          .set({ status: 'rejected' })
          .where(eq(referenceSpectra.id, plant.referenceId))
      );
    expect(await reject()).toContain('used by a method version');
    await expect(
      base.ownerSql`update reference_spectra set source_lot = 'another' where id = ${plant.referenceId}`
    ).rejects.toThrow('never change');
    await end(id);
  });

  it('drafts may change their references', async () => {
    const draft = await makeDraft(base.db, plant, fixtures.people.method_owner, 95);
    expect(
      await answerTo(
        base.db.delete(methodVersionReferences).where(eq(methodVersionReferences.methodVersionId, draft.id))
      )
    ).toBe('kept');
  });
});

describe('lots and dispositions', () => {
  const dispose = (
    by: Person,
    lotId: string,
    status: 'released' | 'rejected',
    outcome: 'release' | 'reject',
    signedLot = lotId
  ) =>
    transact(base.db, async (tx) => {
      const signed = await signature(tx, by, 'lot.release', 'approved', 'lot', signedLot);
      await tx.insert(dispositions).values({ lotId, outcome, reason: 'a test', signatureId: signed.id });
      await tx.update(lots).set({ status }).where(eq(lots.id, lotId));
    });
  const setStatus = (id: string, status: (typeof lots.$inferSelect)['status']) =>
    base.db.update(lots).set({ status }).where(eq(lots.id, id));

  it('begin undecided', async () => {
    const { deliveryId, materialId, manufacturerId } = plant;
    const inserting = base.db.insert(lots).values({
      lotNumber: 'L-BAD',
      deliveryId,
      materialId,
      manufacturerId,
      manufacturerBatch: 'B',
      containerCount: 1,
      status: 'released'
    });
    expect(await answerTo(inserting)).toContain('begins undecided');
  });

  it('a lot is released or rejected only with a signed disposition of the same transaction', async () => {
    const lot = await makeLot(base.db, plant);
    expect(await answerTo(setStatus(lot.id, 'released'))).toContain('only with a signed disposition');
    expect(await answerTo(dispose(fixtures.people.approver, lot.id, 'released', 'reject'))).toContain(
      'only with a signed disposition'
    );
    expect(await answerTo(dispose(fixtures.people.approver, lot.id, 'released', 'release'))).toBe('kept');
    expect(await answerTo(setStatus(lot.id, 'quarantine'))).toContain('only with a signed disposition');
    expect(await answerTo(setStatus(lot.id, 'rejected'))).toContain('only with a signed disposition');
  });

  it('R-023: a disposition takes the signature of its own lot, once', async () => {
    const lot = await makeLot(base.db, plant);
    const other = await makeLot(base.db, plant);
    expect(
      await answerTo(dispose(fixtures.people.approver, lot.id, 'released', 'release', other.id))
    ).toContain('of another record');
    const twice = transact(base.db, async (tx) => {
      const signed = await signature(tx, fixtures.people.approver, 'lot.release', 'approved', 'lot', lot.id);
      const row = { lotId: lot.id, outcome: 'release', reason: 'a test', signatureId: signed.id } as const;
      await tx.insert(dispositions).values(row);
      await tx.insert(dispositions).values(row);
    });
    expect(await answerTo(twice)).toContain('used before');
  });

  it('R-025: who scanned a container of the lot does not decide it, by raw SQL either', async () => {
    const both = await fixtures.addPerson('scanner-and-approver', ['operator', 'approver']);
    const version = await effective(3);
    const lot = await makeLot(base.db, plant);
    await makeScan(base.db, plant, lot.containers[0], both, version);
    for (const [status, outcome] of [
      ['released', 'release'],
      ['rejected', 'reject']
    ] as const) {
      expect(await answerTo(dispose(both, lot.id, status, outcome))).toContain('who scanned a container');
    }
    expect(await answerTo(dispose(fixtures.people.approver, lot.id, 'released', 'release'))).toBe('kept');
    expect(
      await answerTo(makeScan(base.db, plant, lot.containers[1], fixtures.people.operator, version))
    ).toContain('is released already');
  });

  it('a scan belongs to a container of its lot', async () => {
    const [version] = await base.db
      .select()
      .from(methodVersions)
      .where(eq(methodVersions.status, 'effective'));
    const lot = await makeLot(base.db, plant);
    const other = await makeLot(base.db, plant);
    const mixed = { id: lot.containers[0].id, lotId: other.id };
    expect(await answerTo(makeScan(base.db, plant, mixed, fixtures.people.operator, version.id))).toContain(
      'not of this lot'
    );
  });

  it("the time of a signature and of a disposition is the database's", async () => {
    const lot = await makeLot(base.db, plant);
    await transact(base.db, async (tx) => {
      const signed = await signature(tx, fixtures.people.approver, 'lot.release', 'rejected', 'lot', lot.id);
      await tx.insert(dispositions).values({
        lotId: lot.id,
        outcome: 'reject',
        reason: 'a test',
        signatureId: signed.id,
        decidedAt: new Date('2001-01-01')
      });
      await tx.update(lots).set({ status: 'rejected' }).where(eq(lots.id, lot.id));
    });
    const [row] = await base.db.select().from(dispositions).where(eq(dispositions.lotId, lot.id));
    expect(row.decidedAt.getFullYear()).toBeGreaterThan(2020);
  });
});

describe('grants and requests', () => {
  it('R-005: nobody grants a role to themselves, and a grant only ends, once', async () => {
    const { administrator, operator } = fixtures.people;
    const own = base.db.insert(roleGrants).values({
      userId: administrator.id,
      role: 'approver',
      grantedBy: administrator.id,
      reason: 'would like to'
    });
    expect(await answerTo(own)).toContain('role_grants_not_own');
    const endIt = (reason: string) =>
      base.db
        .update(roleGrants)
        .set({ endedAt: sql`clock_timestamp()`, endedBy: administrator.id, endReason: reason })
        .where(eq(roleGrants.userId, operator.id));
    expect(await answerTo(endIt('moved to another post'))).toBe('kept');
    expect(await answerTo(endIt('another reason'))).toContain('only ended, once');
    await expect(
      base.ownerSql`update role_grants set role = 'approver' where user_id = ${operator.id}`
    ).rejects.toThrow('never edited');
  });

  it('a granted repeat is used once, and a decided request does not change', async () => {
    const { operator, approver } = fixtures.people;
    const [version] = await base.db
      .select()
      .from(methodVersions)
      .where(eq(methodVersions.status, 'effective'));
    const lot = await makeLot(base.db, plant);
    const scan = await makeScan(base.db, plant, lot.containers[0], operator, version.id);
    const [request] = await base.db
      .insert(repeatRequests)
      .values({
        containerId: lot.containers[0].id,
        scanId: scan.id,
        cause: 'window',
        reason: 'fogged',
        requestedBy: operator.id,
        requestedByName: 'Operator'
      })
      .returning();
    const set = (values: Partial<typeof repeatRequests.$inferInsert>) =>
      answerTo(base.db.update(repeatRequests).set(values).where(eq(repeatRequests.id, request.id)));
    expect(await set({ outcome: 'granted', decidedBy: operator.id })).toContain('repeat_requests_not_own');
    expect(
      await set({
        outcome: 'granted',
        decidedBy: approver.id,
        decidedByName: 'Approver',
        decisionReason: 'plausible'
      })
    ).toBe('kept');
    expect(await set({ outcome: 'declined' })).toContain('does not change');
    expect(await set({ usedByScanId: crypto.randomUUID() })).toBe('kept');
    expect(await set({ usedByScanId: crypto.randomUUID() })).toContain('used once');
  });
});
