import {
  appendFileSync,
  chownSync,
  existsSync,
  mkdirSync,
  readFileSync,
  rmSync,
  statSync,
  writeFileSync
} from 'node:fs';
import { join } from 'node:path';
import { READY_FILE } from './clusterPlace.mjs';
import { DATABASE_NAME, OWNER_ROLE } from './databaseUrls.mjs';
import { PlainStop, diskFullSentence } from './plainStop.mjs';
import { findFreePort } from './ports.mjs';
import { runToEnd } from './processes.mjs';

/**
 * A PostgreSQL server of our own: on the loopback address only, without a socket file (deep paths break those),
 * passwords checked by SCRAM, checksums on. It lies in one folder: cluster/ (PostgreSQL's files), server.log and
 * ready.json.
 *
 * @typedef {import('./postgresPrograms.mjs').PostgresPrograms} PostgresPrograms
 * @typedef {import('./processes.mjs').Account} Account
 * @typedef {{ folder: string, programs: PostgresPrograms, account: Account | null, signal?: AbortSignal }} Cluster
 */

/** What PostgreSQL's programs may see of our environment: settings meant for other servers stay out. */
const ENVIRONMENT = { PATH: process.env.PATH, LANG: 'C.UTF-8', LC_ALL: 'C.UTF-8', TZ: 'UTC' };

const SETTINGS = [
  "listen_addresses = '127.0.0.1'",
  "unix_socket_directories = ''",
  "timezone = 'UTC'",
  "log_timezone = 'UTC'",
  "log_line_prefix = '%m [%p] '"
];

/**
 * @param {Cluster} cluster @param {string} name @param {string[]} words @param {import('./processes.mjs').RunOptions} [more]
 */
function program({ programs, account, signal }, name, words, more) {
  // cwd '/': the account may not be able to enter the folder that we were started in.
  return runToEnd(join(programs.folder, name), words, {
    cwd: '/',
    env: ENVIRONMENT,
    account,
    signal,
    ...more
  });
}

/**
 * Makes the cluster, its owner role and its empty database. The marker is written when all of it is done.
 * @param {Cluster} cluster
 * @param {{ superuserPassword: string, ownerPassword: string, data: string, settings?: readonly string[] }} options
 *   data: the data folder it is made for
 */
export async function makeCluster(cluster, { superuserPassword, ownerPassword, data, settings = [] }) {
  const { folder, account } = cluster;
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  own(folder, account);
  const passwordFile = join(folder, 'password');
  writeFileSync(passwordFile, `${superuserPassword}\n`, { mode: 0o600 });
  own(passwordFile, account);
  const words = [
    '-D',
    join(folder, 'cluster'),
    '-U',
    'postgres',
    '-A',
    'scram-sha-256',
    `--pwfile=${passwordFile}`
  ];
  let made;
  try {
    made = await program(cluster, 'initdb', [...words, '-E', 'UTF8', '--locale=C.UTF-8', '--data-checksums']);
  } finally {
    rmSync(passwordFile, { force: true });
  }
  // initdb takes away what it made when it fails, so the next start begins anew.
  if (made.code !== 0) throw new PlainStop(explainFailure('made', made.output, folder));
  appendFileSync(join(folder, 'cluster', 'postgresql.conf'), `\n${[...SETTINGS, ...settings].join('\n')}\n`);
  await makeDatabase(cluster, ownerPassword);
  writeFileSync(join(folder, READY_FILE), `${JSON.stringify({ major: cluster.programs.major, data })}\n`);
}

/**
 * Single-user mode needs neither a running server nor a client program. It goes on after an error and ends with 0
 * all the same, so its output is looked at.
 * @param {Cluster} cluster @param {string} ownerPassword
 */
async function makeDatabase(cluster, ownerPassword) {
  const statements = [
    `CREATE ROLE ${OWNER_ROLE} LOGIN CREATEROLE PASSWORD '${ownerPassword.replaceAll("'", "''")}'`,
    `CREATE DATABASE ${DATABASE_NAME} OWNER ${OWNER_ROLE}`
  ];
  const words = ['--single', '-D', join(cluster.folder, 'cluster'), 'postgres'];
  const { code, output } = await program(cluster, 'postgres', words, { input: `${statements.join('\n')}\n` });
  if (code !== 0 || /\b(ERROR|FATAL|PANIC):/.test(output)) {
    throw new PlainStop(explainFailure('made', output, cluster.folder));
  }
}

/** @param {string} path @param {Account | null} account */
function own(path, account) {
  if (account) chownSync(path, account.uid, account.gid);
}

/**
 * Starts the server and waits until it takes connections. One that already runs on these files (left by a start
 * that was killed) is taken over.
 * @param {Cluster} cluster @param {number} [rememberedPort]
 * @returns {Promise<number>} its port
 */
export async function startCluster(cluster, rememberedPort) {
  const running = await runningPort(cluster);
  if (running !== null) return running;
  const port = await findFreePort(rememberedPort);
  const log = join(cluster.folder, 'server.log');
  const logLength = existsSync(log) ? statSync(log).size : 0;
  const words = [
    'start',
    '-D',
    join(cluster.folder, 'cluster'),
    '-w',
    '-t',
    '120',
    '-l',
    log,
    '-o',
    `-p ${port}`
  ];
  const { code } = await program(cluster, 'pg_ctl', words, { silent: true });
  if (code !== 0) {
    const told = existsSync(log) ? readFileSync(log).subarray(logLength).toString('utf8') : '';
    throw new PlainStop(explainFailure('started', told, cluster.folder));
  }
  return port;
}

/** The port of a server that runs on these files, or null. @param {Cluster} cluster */
export async function runningPort(cluster) {
  const files = join(cluster.folder, 'cluster');
  const { code } = await program(cluster, 'pg_ctl', ['status', '-D', files]);
  if (code !== 0) return null;
  return Number(readFileSync(join(files, 'postmaster.pid'), 'utf8').split('\n')[3]);
}

/**
 * Stops the server: open transactions are rolled back, everything committed is on the disk.
 * @param {Cluster} cluster
 */
export async function stopCluster(cluster) {
  const words = ['stop', '-D', join(cluster.folder, 'cluster'), '-m', 'fast', '-w', '-t', '120'];
  const { code, output } = await program({ ...cluster, signal: undefined }, 'pg_ctl', words);
  if (code !== 0 && (await runningPort({ ...cluster, signal: undefined })) !== null) {
    throw new PlainStop(`The database server did not stop:\n${output.trim()}`);
  }
}

/**
 * What to say when PostgreSQL would not.
 * @param {'made' | 'started'} what @param {string} output @param {string} folder
 */
export function explainFailure(what, output, folder) {
  if (/No space left on device|Check free disk space/i.test(output)) return diskFullSentence(folder);
  const telling = output.split('\n').filter((line) => /\b(error|FATAL|PANIC|HINT|DETAIL)\b:/i.test(line));
  const lines = telling.length > 0 ? telling.slice(-6) : output.trim().split('\n').slice(-6);
  const kept = what === 'started' ? ' What is stored in it is untouched.' : '';
  return `The database in ${folder} could not be ${what}.${kept} PostgreSQL says:\n${lines.join('\n')}`;
}
