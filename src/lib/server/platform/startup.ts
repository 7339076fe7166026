import { closeDatabase, database } from '../db/client';
import { authSecret, databaseUrl, smtpUrl, trailHeadsFile, trailKeyFile } from './env';
import { startJobs, type JobHandler } from './jobs';
import { log } from './log';
import { startMailSender } from './mailSender';
import { startSealer } from './sealer';
import { trailKey } from './trailKey';
import { missingWalls } from './walls';

// Kept on the process, because a development server loads this module anew at each change.
const STARTED = Symbol.for('wharfinger.background');
type Started = typeof globalThis & { [STARTED]?: Promise<void> };

/**
 * Starts what runs beside the requests (sealer, mail, jobs), once in a process. Refuses to start at all when the
 * database would let the application change the trail: an audit trail that can be switched off is none.
 */
export function startBackground(handlers: Readonly<Record<string, JobHandler>> = {}): Promise<void> {
  const process_ = globalThis as Started;
  process_[STARTED] ??= start(handlers);
  return process_[STARTED];
}

async function start(handlers: Readonly<Record<string, JobHandler>>): Promise<void> {
  const db = database();
  const faults = await missingWalls(db);
  if (faults.length > 0)
    throw new Error(
      `The application does not start, because its audit trail would not be protected. ${faults.join(' ')}`
    );
  if (!trailKeyFile())
    throw new Error(
      'The application does not start: TRAIL_KEY_FILE does not say with which key the audit trail is signed.'
    );
  if (!authSecret())
    throw new Error(
      'The application does not start: AUTH_SECRET, with which the sign-in forms are protected, is not set.'
    );
  trailKey();
  if (!trailHeadsFile())
    log.warn(
      'TRAIL_HEADS_FILE is not set: no tree heads are kept outside the database, so a cut trail cannot be told from a short one'
    );
  const url = smtpUrl();
  if (!url) log.warn('SMTP_URL is not set: mails wait in the outbox');
  const services = [
    startSealer(db),
    ...(url ? [startMailSender(db, url)] : []),
    await startJobs(databaseUrl(), handlers)
  ];
  process.once('sveltekit:shutdown', () => {
    void Promise.allSettled(services.map((service) => service.stop())).then(() => closeDatabase());
  });
}
