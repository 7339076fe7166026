import { spawn } from 'node:child_process';
import { setTimeout as pause } from 'node:timers/promises';
import { pathToFileURL } from 'node:url';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { Stopped, runToEnd, startChild, stopChild } from '../../scripts/lib/processes.mjs';

const NODE = process.execPath;
const library = (name: string) => pathToFileURL(resolve('scripts/lib', name)).href;

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch {
    return false;
  }
}

/** Whether the process ends within five seconds. */
async function ends(pid: number): Promise<boolean> {
  for (let i = 0; i < 100 && isAlive(pid); i += 1) await pause(50);
  return !isAlive(pid);
}

describe('running programs', () => {
  it('gives the exit code, both outputs together and the standard output alone', async () => {
    const text = "console.error('to the side'); console.log('out'); process.exitCode = 3";
    const told = await runToEnd(NODE, ['-e', text]);
    expect(told.code).toBe(3);
    expect(told.stdout).toBe('out\n');
    expect(told.output).toContain('to the side');
  });

  it('passes text in', async () => {
    const told = await runToEnd(NODE, ['-e', 'process.stdin.pipe(process.stdout)'], { input: 'a line' });
    expect(told.stdout).toBe('a line');
  });

  it('gives 127 for a program that is not there', async () => {
    expect((await runToEnd('/usr/bin/no-such-program', [])).code).toBe(127);
  });

  it('stops the program when the user stops the command', async () => {
    const stopping = new AbortController();
    const running = runToEnd(NODE, ['-e', 'setInterval(() => {}, 1000)'], { signal: stopping.signal });
    setTimeout(() => stopping.abort(new Stopped()), 100);
    await expect(running).rejects.toBeInstanceOf(Stopped);
    expect(() => runToEnd(NODE, ['-e', ''], { signal: stopping.signal })).toThrow(Stopped);
  });
});

describe('programs that keep running', () => {
  it('are asked to stop first, and do it their own way', async () => {
    const text =
      "process.on('SIGTERM', () => process.exit(7)); process.send('up'); setInterval(() => {}, 1000)";
    const running = startChild(NODE, ['-e', text]);
    await new Promise((r) => running.child.once('message', r));
    await stopChild(running, 5000);
    expect(await running.ended).toEqual({ code: 7, signal: null });
  });

  it('are ended by force when they do not stop in time', async () => {
    const text = "process.on('SIGTERM', () => {}); process.send('up'); setInterval(() => {}, 1000)";
    const running = startChild(NODE, ['-e', text]);
    await new Promise((r) => running.child.once('message', r));
    await stopChild(running, 200);
    expect(await running.ended).toEqual({ code: null, signal: 'SIGKILL' });
  });

  it('stop themselves when the command that started them was killed', async () => {
    const child = `['--import', '${library('stopWithParent.mjs')}', '-e', 'setInterval(() => {}, 1000)']`;
    const text = `import { startChild } from '${library('processes.mjs')}';
      const { child } = startChild(process.execPath, ${child});
      console.log(child.pid);`;
    const parent = spawn(NODE, ['--input-type=module', '-e', text], { stdio: ['ignore', 'pipe', 'inherit'] });
    const pid = Number(await new Promise((r) => parent.stdout.once('data', r)));
    await pause(300);
    expect(isAlive(pid)).toBe(true);
    parent.kill('SIGKILL');
    expect(await ends(pid)).toBe(true);
  });
});
