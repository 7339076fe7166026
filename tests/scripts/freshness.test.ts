import { mkdirSync, mkdtempSync, rmSync, utimesSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { buildIsCurrent, buildSources, sourceFingerprint } from '../../scripts/lib/buildFreshness.mjs';
import { packagesAreCurrent } from '../../scripts/lib/npmPackages.mjs';

describe('whether the build is current', () => {
  let root: string;
  const write = (path: string, text: string) => writeFileSync(join(root, path), text);
  const stamp = () => write('build/made-from.txt', `${sourceFingerprint(root)}\n`);

  beforeEach(() => {
    root = mkdtempSync(join(tmpdir(), 'wharfinger-freshness-'));
    for (const folder of ['src/lib', 'static', 'build', 'tests'])
      mkdirSync(join(root, folder), { recursive: true });
    write('src/lib/one.ts', 'one');
    write('static/mark.svg', 'mark');
    write('package-lock.json', '{}');
    write('svelte.config.js', '');
    write('tests/one.test.ts', '');
    write('build/index.js', '');
  });
  afterEach(() => rmSync(root, { recursive: true }));

  it('is made from sources, static files, the lockfile and the configuration, and from nothing else', () => {
    const expected = ['package-lock.json', 'src/lib/one.ts', 'static/mark.svg', 'svelte.config.js'];
    expect(buildSources(root)).toEqual(expected);
  });

  it('is not current without a stamp, which a broken-off build does not leave', () => {
    expect(buildIsCurrent(root)).toBe(false);
    stamp();
    expect(buildIsCurrent(root)).toBe(true);
  });

  it.each<[string, () => void]>([
    ['a changed file', () => write('src/lib/one.ts', 'other')],
    ['a new file', () => write('src/lib/two.ts', '')],
    ['a removed file', () => rmSync(join(root, 'static/mark.svg'))],
    ['a file put back with an older date', () => utimesSync(join(root, 'src/lib/one.ts'), 1e9, 1e9)],
    ['a changed lockfile', () => write('package-lock.json', '{ }')],
    ['a removed build', () => rmSync(join(root, 'build/index.js'))]
  ])('is stale after %s', (_, change) => {
    stamp();
    change();
    expect(buildIsCurrent(root)).toBe(false);
  });

  it('stays current when only a test changes', () => {
    stamp();
    write('tests/one.test.ts', 'changed');
    expect(buildIsCurrent(root)).toBe(true);
  });
});

describe('whether the npm packages are current', () => {
  const locked = {
    '': {},
    'node_modules/a': { version: '1.0.0', integrity: 'sha512-a' },
    'node_modules/b-for-another-platform': { version: '2.0.0', integrity: 'sha512-b', optional: true }
  };

  it('is when everything but optional packages is there in the locked version', () => {
    expect(packagesAreCurrent(locked, { 'node_modules/a': locked['node_modules/a'] })).toBe(true);
  });

  it.each([
    ['nothing was installed', null],
    ['a package is missing', {}],
    ['a version differs', { 'node_modules/a': { version: '1.0.1', integrity: 'sha512-a' } }],
    ['its contents differ', { 'node_modules/a': { version: '1.0.0', integrity: 'sha512-x' } }],
    [
      'a package is left over',
      { 'node_modules/a': locked['node_modules/a'], 'node_modules/z': { version: '1.0.0' } }
    ]
  ])('is not when %s', (_, installed) => {
    expect(packagesAreCurrent(locked, installed)).toBe(false);
  });
});
