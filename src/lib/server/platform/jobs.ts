import { sql } from 'drizzle-orm';
import { Logger, run, type Runner } from 'graphile-worker';
import type { Executor } from '../db/client';
import { log } from './log';

export interface JobContext {
  /** Ends when the process is told to stop: a long job should then end too, and will run again. */
  readonly signal?: AbortSignal;
  /** 1 at the first run. */
  readonly attempt: number;
}

/** What runs a kind of job. It may run more than once, so it must be safe to repeat. */
export type JobHandler = (payload: unknown, context: JobContext) => Promise<void>;

export interface JobOptions {
  /** Jobs with the same key are one: a later one replaces one that waits. */
  readonly key?: string;
  readonly maxAttempts?: number;
}

/** Queues a job in the transaction of what it is for: it runs if, and only if, that is kept. */
export async function queueJob(
  tx: Executor,
  name: string,
  payload: object,
  options: JobOptions = {}
): Promise<void> {
  await tx.execute(sql`
    select graphile_worker.add_job(${name}::text, payload => ${JSON.stringify(payload)}::json,
      job_key => ${options.key ?? null}::text, max_attempts => ${options.maxAttempts ?? 5}::int)`);
}

const LEVELS = { error: 'error', warning: 'warn', info: 'debug', debug: 'trace' } as const;

/** Runs queued jobs in this process, one at a time beside its other work, until stopped. */
export async function startJobs(
  databaseUrl: string,
  handlers: Readonly<Record<string, JobHandler>>
): Promise<{ stop(): Promise<void> }> {
  const taskList = Object.fromEntries(
    Object.entries(handlers).map(([name, handler]) => [
      name,
      (payload: unknown, helpers: { job: { attempts: number }; abortSignal?: AbortSignal }) =>
        handler(payload, { signal: helpers.abortSignal, attempt: helpers.job.attempts })
    ])
  );
  const runner: Runner = await run({
    connectionString: databaseUrl,
    taskList,
    concurrency: 1,
    maxPoolSize: 3,
    noHandleSignals: true,
    pollInterval: 1000,
    crontab: '',
    logger: new Logger(() => (level, message) => log[LEVELS[level]]({ job: true }, message))
  });
  return { stop: () => runner.stop() };
}
