import { existsSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { holderIsAlive, takeFolderLock } from '../../scripts/lib/folderLock.mjs';

describe('the lock of a data folder', () => {
  let folder: string;
  beforeEach(() => (folder = mkdtempSync(join(tmpdir(), 'wharfinger-lock-'))));
  afterEach(() => rmSync(folder, { recursive: true }));

  it('keeps a second start out with a sentence, until the first gives it back', () => {
    const file = join(folder, 'start.lock');
    const giveBack = takeFolderLock(file, 'Another start is running.');
    expect(() => takeFolderLock(file, 'Another start is running.')).toThrow('Another start is running.');
    giveBack();
    expect(existsSync(file)).toBe(false);
    takeFolderLock(file, 'Another start is running.')();
  });

  it('is taken over from a process that is gone', () => {
    const file = join(folder, 'start.lock');
    writeFileSync(file, '4194305 1\n');
    expect(() => takeFolderLock(file, 'Another start is running.')).not.toThrow();
  });

  it('does not take another program with a reused number for the holder', () => {
    expect(holderIsAlive(`${process.pid} 1`)).toBe(false);
    expect(holderIsAlive(`${process.pid}`)).toBe(true);
    expect(holderIsAlive('not a number')).toBe(false);
  });
});
