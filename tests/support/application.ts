import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { generateKeyPairSync } from 'node:crypto';
import { writeFileSync } from 'node:fs';

const ROOT = dirname(dirname(dirname(fileURLToPath(import.meta.url))));
const START_TIMEOUT_MS = 30_000;

/** The built application as its own process, on a port of its own. */
export interface RunningApplication {
  readonly origin: string;
  /** What it has printed so far. */
  readonly output: () => string;
  /** Sends a request with the session cookie of a person (or none). */
  request(path: string, options?: RequestInit & { token?: string }): Promise<Response>;
  /** Ends it without warning. */
  kill(): Promise<void>;
  stop(): Promise<void>;
}

/** A port nobody listens on. */
export function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      probe.close(() =>
        address !== null && typeof address === 'object' ? resolve(address.port) : reject(new Error('no port'))
      );
    });
  });
}

/** Starts `node build` on the database, as the application's role, and waits until it answers. */
export async function startApplication(
  appUrl: string,
  options: { port?: number; env?: NodeJS.ProcessEnv } = {}
): Promise<RunningApplication> {
  const port = options.port ?? (await freePort());
  const origin = `http://127.0.0.1:${port}`;
  const folder = mkdtempSync(join(tmpdir(), 'wharfinger-app-'));
  const keyFile = join(folder, 'trail-key.pem');
  writeFileSync(keyFile, generateKeyPairSync('ed25519').privateKey.export({ type: 'pkcs8', format: 'pem' }), {
    mode: 0o600
  });
  const child: ChildProcess = spawn(process.execPath, ['build'], {
    cwd: ROOT,
    env: {
      PATH: process.env.PATH,
      NODE_ENV: 'production',
      HOST: '127.0.0.1',
      PORT: String(port),
      ORIGIN: origin,
      BODY_SIZE_LIMIT: '64M',
      DATABASE_URL: appUrl,
      AUTH_SECRET: 'only for tests, never for anything else',
      AUTH_TRUST_HOST: 'true',
      TRAIL_KEY_FILE: keyFile,
      TRAIL_HEADS_FILE: join(folder, 'tree-heads.ndjson'),
      SHUTDOWN_TIMEOUT: '3',
      ...options.env
    },
    stdio: ['ignore', 'pipe', 'pipe']
  });
  let output = '';
  child.stdout?.on('data', (chunk) => (output += String(chunk)));
  child.stderr?.on('data', (chunk) => (output += String(chunk)));
  const ended = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  const end = async (signal: NodeJS.Signals) => {
    if (child.exitCode === null && child.signalCode === null) child.kill(signal);
    await ended;
    rmSync(folder, { recursive: true, force: true });
  };
  await answering(origin, child, () => output);
  return {
    origin,
    output: () => output,
    request: (path, { token, headers, ...init } = {}) =>
      fetch(origin + path, {
        redirect: 'manual',
        ...init,
        headers: {
          origin,
          ...(token ? { cookie: `__Host-wharfinger=${token}` } : {}),
          ...(headers as Record<string, string>)
        }
      }),
    kill: () => end('SIGKILL'),
    stop: () => end('SIGTERM')
  };
}

async function answering(origin: string, child: ChildProcess, output: () => string): Promise<void> {
  const deadline = Date.now() + START_TIMEOUT_MS;
  while (Date.now() < deadline) {
    if (child.exitCode !== null) throw new Error(`the application ended while starting:\n${output()}`);
    try {
      await fetch(`${origin}/signin`, { redirect: 'manual' });
      return;
    } catch {
      await new Promise((resolve) => setTimeout(resolve, 100));
    }
  }
  child.kill('SIGKILL');
  throw new Error(`the application did not answer:\n${output()}`);
}
