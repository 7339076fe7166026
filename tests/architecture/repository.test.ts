import { readFileSync } from 'node:fs';
import { basename } from 'node:path';
import { describe, expect, it } from 'vitest';
import { isText, numberedLines, topLevel, writtenFiles } from './sourceFiles';

/** Everything that may stand at the top of the checkout, beside dotfiles. */
const TOP_LEVEL = [
  'src',
  'static',
  'drizzle',
  'reference',
  'tests',
  'scripts',
  'package.json',
  'package-lock.json',
  'svelte.config.js',
  'vite.config.ts',
  'tailwind.config.ts',
  'drizzle.config.ts',
  'eslint.config.js',
  'tsconfig.json',
  'README.md',
  'DEVELOPERS.md',
  'LICENSE'
];

const files = writtenFiles();
const texts = files.filter((path) => isText(path) && path !== 'package-lock.json');
/** This file names what it looks for, so it cannot look at itself. */
const others = texts.filter((path) => path !== 'tests/architecture/repository.test.ts');

/** "path:line: text" for every line that matches. */
function linesMatching(paths: readonly string[], pattern: RegExp): string[] {
  return paths.flatMap((path) =>
    numberedLines(path)
      .filter(({ text }) => pattern.test(text))
      .map(({ line, text }) => `${path}:${line}: ${text.trim().slice(0, 120)}`)
  );
}

describe('the checkout', () => {
  it('holds nothing at its top that is not on the list', () => {
    expect(topLevel().filter((name) => !name.startsWith('.') && !TOP_LEVEL.includes(name))).toEqual([]);
  });

  it('has no catch-all files', () => {
    const catchAll = /^(utils?|helpers?|common|misc)(\.|$)/i;
    expect(files.filter((path) => path.split('/').some((part) => catchAll.test(part)))).toEqual([]);
  });

  it('names a component in PascalCase and a module in camelCase', () => {
    const written = files.filter((path) => path.startsWith('src/lib/'));
    const wrong = written.filter((path) => {
      const name = basename(path);
      if (name.endsWith('.svelte')) return !/^[A-Z][A-Za-z0-9]*\.svelte$/.test(name);
      if (/\.(ts|js)$/.test(name)) return !/^[a-z][A-Za-z0-9]*(\.svelte|\.d|\.worker)?\.(ts|js)$/.test(name);
      return false;
    });
    expect(wrong).toEqual([]);
  });

  it("names no machine's folders", () => {
    expect(linesMatching(others, /(^|[\s'"`(=:])\/(work|root|home|Users|tmp)\//)).toEqual([]);
  });

  it('names no package registry', () => {
    const registries =
      /registry\.(npmjs|yarnpkg)|npmjs\.(com|org)|npmmirror|artifactory|deb\.debian\.org|_authToken/i;
    expect(linesMatching([...others, 'package-lock.json'], registries)).toEqual([]);
  });

  it('carries no leftover of work in progress', () => {
    const leftovers =
      /\b(TODO|FIXME|XXX|HACK|WIP)\b|\blorem ipsum\b|\bdebugger;|\b(it|test|describe)\.(only|todo)\(/;
    expect(linesMatching(others, leftovers)).toEqual([]);
  });

  it('skips no test without saying why', () => {
    const tests = others.filter((path) => path.startsWith('tests/'));
    expect(linesMatching(tests, /\b(it|test|describe)\.skip\(|\bxit\(|\bxdescribe\(/)).toEqual([]);
  });
});

describe('the lockfile', () => {
  const lock = JSON.parse(readFileSync('package-lock.json', 'utf8')) as {
    packages: Record<string, { version?: string; integrity?: string; inBundle?: boolean; resolved?: string }>;
  };
  const packages = Object.entries(lock.packages).filter(([folder]) => folder !== '');

  it('holds a digest for every package (those bundled inside another are covered by its digest)', () => {
    expect(packages.length).toBeGreaterThan(100);
    const bare = packages.filter(
      ([, { integrity, inBundle }]) => !inBundle && !/^sha512-/.test(integrity ?? '')
    );
    expect(bare.map(([folder]) => folder)).toEqual([]);
  });

  it('points to no address that a package came from', () => {
    expect(packages.filter(([, { resolved }]) => resolved !== undefined).map(([folder]) => folder)).toEqual(
      []
    );
  });

  it('belongs to a package.json whose versions are exact', () => {
    const { dependencies, devDependencies } = JSON.parse(readFileSync('package.json', 'utf8'));
    const loose = Object.entries<string>({ ...dependencies, ...devDependencies }).filter(
      ([, v]) => !/^\d+\.\d+\.\d+$/.test(v)
    );
    expect(loose).toEqual([]);
  });
});
