import { and, asc, eq, lte, sql } from 'drizzle-orm';
import { createTransport } from 'nodemailer';
import type { Database, Transaction } from '../db/client';
import { outboxMails } from '../db/schema';
import { transact } from '../db/transaction';
import { mailFrom } from './env';
import { log } from './log';

/** After each failure the wait doubles from half a minute, up to an hour; after the last it is given up, visibly. */
const FIRST_WAIT_S = 30;
const LONGEST_WAIT_S = 3600;
const ATTEMPTS = 10;

/** Sends one mail, or throws. */
export type SendMail = (mail: {
  to: string;
  subject: string;
  text: string;
  messageId: string;
}) => Promise<void>;

/** Sends over SMTP; every wait in it has an end. */
export function smtpSender(url: string): SendMail & { close(): void } {
  const transport = createTransport(url, { from: mailFrom() });
  Object.assign(transport.options, {
    connectionTimeout: 10_000,
    greetingTimeout: 10_000,
    socketTimeout: 20_000,
    disableFileAccess: true,
    disableUrlAccess: true
  });
  const send: SendMail = async (mail) => {
    await transport.sendMail(mail);
  };
  return Object.assign(send, { close: () => transport.close() });
}

/**
 * Sends the oldest mail that is due; false when none is. Its row is locked while it is sent, so that two
 * processes never send the same one; a crash in between may send it twice, with the same message id.
 */
export async function sendNextMail(db: Database, send: SendMail): Promise<boolean> {
  return transact(db, async (tx) => {
    const [mail] = await tx
      .select()
      .from(outboxMails)
      .where(and(eq(outboxMails.status, 'waiting'), lte(outboxMails.nextAttemptAt, sql`clock_timestamp()`)))
      .orderBy(asc(outboxMails.nextAttemptAt))
      .limit(1)
      .for('update', { skipLocked: true });
    if (!mail) return false;
    try {
      await send({
        to: mail.toAddress,
        subject: mail.subject,
        text: mail.body,
        messageId: `<${mail.id}@wharfinger>`
      });
      await tx
        .update(outboxMails)
        .set({ status: 'sent', attempts: mail.attempts + 1, lastError: null, sentAt: sql`clock_timestamp()` })
        .where(eq(outboxMails.id, mail.id));
    } catch (error) {
      await postpone(tx, mail.id, mail.attempts + 1, error instanceof Error ? error.message : String(error));
    }
    return true;
  });
}

async function postpone(tx: Transaction, id: string, attempts: number, why: string): Promise<void> {
  const waitS = Math.min(LONGEST_WAIT_S, FIRST_WAIT_S * 2 ** (attempts - 1));
  const status = attempts >= ATTEMPTS ? 'failed' : 'waiting';
  log[status === 'failed' ? 'error' : 'warn']({ mail: id, attempts, why }, 'a mail could not be sent');
  await tx
    .update(outboxMails)
    .set({
      status,
      attempts,
      lastError: why.slice(0, 500),
      nextAttemptAt: sql`clock_timestamp() + make_interval(secs => ${waitS})`
    })
    .where(eq(outboxMails.id, id));
}

/** Sends what the outbox holds, looking every two seconds, until stopped. */
export function startMailSender(db: Database, url: string, intervalMs = 2000): { stop(): Promise<void> } {
  const send = smtpSender(url);
  let stopped = false;
  let wake = () => {};
  const running = (async () => {
    while (!stopped) {
      const more = await sendNextMail(db, send).catch((error: unknown) => {
        log.error({ err: error }, 'the mail outbox could not be read');
        return false;
      });
      if (more || stopped) continue;
      await new Promise<void>((resolve) => {
        const timer = setTimeout(resolve, intervalMs);
        wake = () => (clearTimeout(timer), resolve());
      });
    }
    send.close();
  })();
  return {
    stop: async () => {
      stopped = true;
      wake();
      await running;
    }
  };
}
