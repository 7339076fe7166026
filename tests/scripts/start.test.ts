import { spawn } from 'node:child_process';
import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readFileSync,
  readdirSync,
  rmSync,
  writeFileSync
} from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { demoAccountLines } from '../../scripts/lib/application.mjs';
import { takeFolderLock } from '../../scripts/lib/folderLock.mjs';
import { findFreePort } from '../../scripts/lib/ports.mjs';

describe('npm start says in a sentence why it does not start', { timeout: 60_000 }, () => {
  let data: string;
  beforeEach(() => (data = mkdtempSync('/var/tmp/wharfinger-start-test-')));
  afterEach(() => rmSync(data, { recursive: true }));

  /** Runs the command to its end. */
  function start(
    words: string[],
    env: NodeJS.ProcessEnv = {}
  ): Promise<{ code: number | null; output: string }> {
    const { DATABASE_URL: _, ...own } = process.env;
    const child = spawn(process.execPath, ['scripts/start.mjs', '--data', data, ...words], {
      env: { ...own, ...env }
    });
    let output = '';
    child.stdout.on('data', (text) => (output += text));
    child.stderr.on('data', (text) => (output += text));
    return new Promise((resolve) => child.once('close', (code) => resolve({ code, output })));
  }

  it('the port is in use: nothing is made', async () => {
    const server = createServer();
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    const { port } = server.address() as AddressInfo;
    const { code, output } = await start(['--port', String(port)]);
    server.close();
    expect(code).toBe(1);
    expect(output.trim()).toBe(
      `Port ${port} is in use by another program, so nothing was started. ` +
        `Stop that program, or choose another port: npm start -- --port ${port + 1}`
    );
    expect(readdirSync(data)).toEqual([]);
  });

  it('another start uses the same folder', async () => {
    const giveBack = takeFolderLock(join(data, 'start.lock'), 'unused');
    const { code, output } = await start(['--port', String(await findFreePort())]);
    expect(code).toBe(1);
    expect(output).toContain(
      `Another npm start is running with ${data}. Nothing was started and nothing was changed.`
    );
    expect(existsSync(join(data, 'start.lock'))).toBe(true);
    giveBack();
  });

  it('the database is half made: it is left as it was', async () => {
    mkdirSync(join(data, 'postgres'));
    writeFileSync(join(data, 'postgres', 'something'), 'kept');
    const { code, output } = await start(['--port', String(await findFreePort())]);
    expect(code).toBe(1);
    expect(output).toMatch(/^\S+ holds a database that was never finished/);
    expect(readFileSync(join(data, 'postgres', 'something'), 'utf8')).toBe('kept');
    expect(readdirSync(data)).toEqual(['postgres']);
  });

  it('DATABASE_URL names no PostgreSQL database', async () => {
    const { code, output } = await start(['--port', String(await findFreePort())], {
      DATABASE_URL: 'mysql://h/x'
    });
    expect(code).toBe(1);
    expect(output).toMatch(
      /^DATABASE_URL is not the address of a PostgreSQL database\. Nothing was started\./
    );
  });

  it('an option is unknown, and the help shows those there are', async () => {
    expect(await start(['--prot', '80'])).toMatchObject({
      code: 2,
      output: expect.stringContaining('no option --prot')
    });
    const help = await start(['--help']);
    expect(help.code).toBe(0);
    for (const option of ['--port N', '--data FOLDER', '--no-demo', '--dev'])
      expect(help.output).toContain(option);
  });
});

describe('the demo accounts that are printed', () => {
  it('stand in columns, one line each, and are none where there is no list', () => {
    const folder = mkdtempSync('/var/tmp/wharfinger-accounts-test-');
    const file = join(folder, 'demo-accounts.json');
    expect(demoAccountLines(file)).toEqual([]);
    const accounts = [
      { userName: 'a.bo', password: 'one two', printedName: 'Ada Bo', role: 'Operator' },
      { userName: 'cecil.d', password: 'three', printedName: 'Cecil Do', role: 'Auditor' }
    ];
    writeFileSync(file, JSON.stringify(accounts));
    expect(demoAccountLines(file)).toEqual([
      '  a.bo     one two  Ada Bo    Operator',
      '  cecil.d  three    Cecil Do  Auditor'
    ]);
    rmSync(folder, { recursive: true });
  });
});
