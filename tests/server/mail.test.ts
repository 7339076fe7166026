import { SMTPServer } from 'smtp-server';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { outboxMails } from '$lib/server/db/schema';
import { transact } from '$lib/server/db/transaction';
import { queueJob, startJobs } from '$lib/server/platform/jobs';
import { queueMail } from '$lib/server/platform/mail';
import { sendNextMail, startMailSender, type SendMail } from '$lib/server/platform/mailSender';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';

let base: TestDatabase;
let fixtures: Fixtures;

beforeAll(async () => {
  base = await testDatabase();
  fixtures = await makeFixtures(base.db);
});
afterAll(() => base.close());
afterEach(() => base.ownerSql`delete from outbox_mails`);

const mail = { kind: 'test', subject: 'A drum waits', body: 'Container 3 was set aside.', link: '/lots' };
const toApprover = () => ({ ...mail, to: { userId: fixtures.people.approver.id } });
const outbox = () => base.db.select().from(outboxMails);
const makeDue = () =>
  base.ownerSql`update outbox_mails set next_attempt_at = clock_timestamp() where status = 'waiting'`;

describe('the outbox', () => {
  it('holds the mail with the change it tells of, or neither', async () => {
    const failing = transact(base.db, async (tx) => {
      await queueMail(tx, toApprover());
      throw new Error('power cut');
    });
    await expect(failing).rejects.toThrow();
    expect(await outbox()).toHaveLength(0);
    expect(await transact(base.db, (tx) => queueMail(tx, toApprover()))).toBe(1);
    expect(await outbox()).toMatchObject([
      { toAddress: 'approver@example.test', status: 'waiting', body: expect.stringContaining('/lots') }
    ]);
  });

  it('reaches everybody of the site whose role allows the action, once, and nobody else', async () => {
    await fixtures.addPerson('second-approver', ['approver', 'auditor']);
    await fixtures.addPerson('former-approver', ['approver'], { status: 'left' });
    const to = { action: 'review.read', siteId: fixtures.siteId } as const;
    await transact(base.db, (tx) => queueMail(tx, { ...mail, to }));
    expect((await outbox()).map((row) => row.toAddress).sort()).toEqual([
      'approver@example.test',
      'auditor@example.test',
      'second-approver@example.test'
    ]);
  });

  it('lets no line break of a name begin another header', async () => {
    const to = { userId: fixtures.people.approver.id };
    await transact(base.db, (tx) =>
      queueMail(tx, { ...mail, to, subject: 'Lot 1\r\nBcc: everybody@example.test\n\n<b>' })
    );
    const [row] = await outbox();
    expect(row.subject).toBe('Lot 1 Bcc: everybody@example.test <b>');
  });
});

describe('sending', () => {
  it('waits longer after each failure, gives up after ten, and keeps what went wrong', async () => {
    await transact(base.db, (tx) => queueMail(tx, toApprover()));
    const failing: SendMail = () => Promise.reject(new Error('no route to the harbour'));
    const waits: number[] = [];
    for (let attempt = 1; attempt <= 10; attempt += 1) {
      expect(await sendNextMail(base.db, failing)).toBe(true);
      const [row] = await base.ownerSql<{ wait: number; attempts: number }[]>`
        select extract(epoch from next_attempt_at - clock_timestamp())::float8 as wait, attempts from outbox_mails`;
      expect(row.attempts).toBe(attempt);
      waits.push(Math.round(row.wait));
      expect(await sendNextMail(base.db, failing)).toBe(false);
      await makeDue();
    }
    expect(waits.slice(0, 8)).toEqual([30, 60, 120, 240, 480, 960, 1920, 3600]);
    expect((await outbox())[0]).toMatchObject({ status: 'failed', lastError: 'no route to the harbour' });
    expect(await sendNextMail(base.db, failing)).toBe(false);
  });

  it('of two senders each mail goes out once', async () => {
    for (let index = 0; index < 8; index += 1) await transact(base.db, (tx) => queueMail(tx, toApprover()));
    const sent: string[] = [];
    const send: SendMail = async ({ messageId }) => {
      await new Promise((resolve) => setTimeout(resolve, 5));
      sent.push(messageId);
    };
    const drain = async () => {
      while (await sendNextMail(base.db, send));
    };
    await Promise.all([drain(), drain(), drain()]);
    expect(sent).toHaveLength(8);
    expect(new Set(sent).size).toBe(8);
    expect((await outbox()).every((row) => row.status === 'sent' && row.sentAt !== null)).toBe(true);
  });

  it('over SMTP, from the outbox to the server', async () => {
    const received: string[] = [];
    const server = new SMTPServer({
      disabledCommands: ['AUTH', 'STARTTLS'],
      onData: (stream, _session, done) => {
        let text = '';
        stream.on('data', (chunk: Buffer) => (text += chunk.toString()));
        stream.on('end', () => (received.push(text), done()));
      }
    });
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    const address = server.server.address();
    const port = typeof address === 'object' && address ? address.port : 0;
    await transact(base.db, (tx) => queueMail(tx, toApprover()));
    const sender = startMailSender(base.db, `smtp://127.0.0.1:${port}`, 50);
    await expect.poll(async () => (await outbox())[0].status, { timeout: 10_000 }).toBe('sent');
    await sender.stop();
    await new Promise<void>((resolve) => server.close(() => resolve()));
    expect(received).toHaveLength(1);
    expect(received[0]).toContain('Subject: A drum waits');
    expect(received[0]).toContain('To: approver@example.test');
  });
});

describe('jobs', () => {
  it("run as the application's role, if and only if their transaction was kept, and again after a failure", async () => {
    const seen: unknown[] = [];
    const runner = await startJobs(base.appUrl, {
      count: async (payload, { attempt }) => {
        seen.push([payload, attempt]);
        if (attempt === 1 && (payload as { fails?: boolean }).fails) throw new Error('not this time');
      }
    });
    try {
      await expect(
        transact(base.db, async (tx) => {
          await queueJob(tx, 'count', { n: 0 });
          throw new Error('power cut');
        })
      ).rejects.toThrow('power cut');
      await transact(base.db, (tx) => queueJob(tx, 'count', { n: 1 }));
      await expect.poll(() => seen, { timeout: 10_000 }).toEqual([[{ n: 1 }, 1]]);
      await transact(base.db, (tx) => queueJob(tx, 'count', { n: 2, fails: true }));
      await expect.poll(() => seen.length, { timeout: 10_000 }).toBe(2);
      await base.ownerSql`update graphile_worker._private_jobs set run_at = now()`;
      await expect.poll(() => seen.at(-1), { timeout: 10_000 }).toEqual([{ n: 2, fails: true }, 2]);
    } finally {
      await runner.stop();
    }
  });

  it('with one key are one job', async () => {
    await base.ownerSql`delete from graphile_worker._private_jobs`;
    await transact(base.db, async (tx) => {
      await queueJob(tx, 'later', { n: 1 }, { key: 'the same' });
      await queueJob(tx, 'later', { n: 2 }, { key: 'the same' });
    });
    const rows = await base.ownerSql`select payload from graphile_worker._private_jobs`;
    expect(rows.map((row) => row.payload)).toEqual([{ n: 2 }]);
  });
});
