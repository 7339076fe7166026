import { spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, realpathSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join, relative, resolve } from 'node:path';
import { ESLint } from 'eslint';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';

/** Violations are planted as text, not as files: nobody's folder is touched, and nothing stays behind. */
let eslint: ESLint;
beforeAll(() => {
  // Type information is left out: a planted text belongs to no project.
  eslint = new ESLint({
    overrideConfig: {
      languageOptions: { parserOptions: { projectService: false } },
      rules: {
        '@typescript-eslint/no-floating-promises': 'off',
        '@typescript-eslint/await-thenable': 'off',
        '@typescript-eslint/no-misused-promises': 'off'
      }
    }
  });
});

/** The rules that object to the text in that place. */
async function objections(path: string, text: string): Promise<string[]> {
  const [result] = await eslint.lintText(text, { filePath: path });
  const fatal = result.messages.find((m) => m.fatal);
  if (fatal) throw new Error(`${path}: ${fatal.message}`);
  const rules = result.messages.map((m) => m.ruleId ?? '');
  return rules.filter((rule) => !/unused/.test(rule));
}

const IMPORTS = '@typescript-eslint/no-restricted-imports';
const value = (from: string) => `import { x } from '${from}';\nconsole.log(x);\n`;
const type = (from: string) => `import type { X } from '${from}';\nexport type Y = X;\n`;
const script = (text: string) => `<script lang="ts">\n${text}</script>\n`;

describe('imports go strictly down', () => {
  it.each([
    ['src/lib/spectra/planted.ts', '$lib/identity/decide'],
    ['src/lib/spectra/peaks/planted.ts', '../../identity/decide'],
    ['src/lib/spectra/planted.ts', '../server/db/client'],
    ['src/lib/spectra/planted.ts', 'node:fs'],
    ['src/lib/spectra/planted.ts', 'fs'],
    ['src/lib/spectra/planted.ts', 'drizzle-orm'],
    ['src/lib/spectra/planted.ts', '$app/environment'],
    ['src/lib/identity/planted.ts', '$lib/domain/roles'],
    ['src/lib/identity/planted.ts', '../domain/roles'],
    ['src/lib/identity/planted.ts', 'node:crypto'],
    ['src/lib/domain/planted.ts', '$lib/server/platform/trail'],
    ['src/lib/domain/planted.ts', '$lib/ui/kit/Button.svelte'],
    ['src/lib/domain/planted.ts', '$env/dynamic/private'],
    ['src/lib/domain/planted.ts', '@sveltejs/kit'],
    ['src/lib/ui/kit/planted.ts', '$lib/server/queries/lots'],
    ['src/lib/ui/kit/planted.ts', '../../server/queries/lots'],
    ['src/lib/ui/kit/planted.ts', 'node:buffer'],
    ['src/lib/server/db/planted.ts', '../platform/trail'],
    ['src/lib/server/db/schema/planted.ts', '$lib/server/queries/lots'],
    ['src/lib/server/platform/planted.ts', '../queries/lots'],
    ['src/lib/server/platform/certificate/planted.ts', '../../commands/lots'],
    ['src/lib/server/queries/planted.ts', '../commands/lots'],
    ['src/lib/server/queries/planted.ts', '$lib/server/db/transaction'],
    ['src/lib/server/commands/planted.ts', './lots'],
    ['src/lib/server/commands/planted.ts', '$lib/server/commands/lots'],
    ['src/lib/server/commands/planted.ts', '$lib/ui/kit/Button.svelte'],
    ['src/routes/planted/+page.server.ts', '$lib/server/db/schema'],
    ['src/routes/planted/+server.ts', '$lib/server/db/transaction'],
    ['src/routes/planted/+server.ts', 'drizzle-orm'],
    ['src/hooks.server.ts', 'postgres'],
    ['src/routes/planted/+page.ts', '$lib/server/queries/lots'],
    ['src/lib/spectra/planted.ts', '../../../reference/bands'],
    ['src/lib/server/commands/planted.ts', '../../../../scripts/seed'],
    ['src/routes/planted/+page.server.ts', '../../../tests/support/database']
  ])('%s may not import %s, neither as value nor as type', async (path, from) => {
    expect(await objections(path, value(from))).toEqual([IMPORTS]);
    expect(await objections(path, type(from))).toEqual([IMPORTS]);
  });

  it.each([
    ['src/lib/ui/kit/Planted.svelte', '$lib/server/queries/lots'],
    ['src/routes/planted/+page.svelte', '$lib/server/queries/lots'],
    ['src/routes/planted/+page.svelte', 'node:fs']
  ])('%s may not import %s, a type-only import included', async (path, from) => {
    expect(await objections(path, script(value(from)))).toEqual([IMPORTS]);
    expect(await objections(path, script(type(from)))).toEqual([IMPORTS]);
  });

  it.each([
    ['src/lib/spectra/planted.ts', 'ml-matrix'],
    ['src/lib/spectra/planted.ts', '@stdlib/stats-base-dists-f-quantile'],
    ['src/lib/spectra/peaks/planted.ts', '../spectrum'],
    ['src/lib/identity/planted.ts', '../spectra/spectrum'],
    ['src/lib/domain/planted.ts', '$lib/identity/decision'],
    ['src/lib/domain/planted.ts', 'zod'],
    ['src/lib/ui/lots/planted.ts', '$lib/domain/lots'],
    ['src/lib/server/db/planted.ts', '../../domain/roles'],
    ['src/lib/server/platform/planted.ts', '../db/client'],
    ['src/lib/server/queries/planted.ts', '../platform/trail'],
    ['src/lib/server/commands/planted.ts', '../queries/lots'],
    ['src/lib/server/commands/jobHandlers.ts', './methods'],
    ['src/routes/planted/+page.server.ts', '$lib/server/commands/lots'],
    ['src/routes/planted/+page.server.ts', '$lib/server/db/client'],
    ['src/routes/planted/+page.ts', '$lib/domain/lots']
  ])('%s may import %s', async (path, from) => {
    expect(await objections(path, value(from))).toEqual([]);
  });
});

describe('the pure floors know no clock, chance or surroundings', () => {
  it.each([
    'export const now = Date.now();',
    'export const now = new Date();',
    'export const now = Date();',
    'export const chance = Math.random();',
    'export const id = crypto.randomUUID();',
    'export const bytes = crypto.getRandomValues(new Uint8Array(4));',
    'export const zone = process.env.TZ;',
    "export const text = Buffer.from('a');",
    'export const t = performance.now();',
    "export const answer = fetch('/x');",
    'setTimeout(() => {}, 10);',
    'export const here = import.meta.url;'
  ])('%s', async (text) => {
    for (const floor of ['spectra', 'identity', 'domain']) {
      expect(await objections(`src/lib/${floor}/planted.ts`, `${text}\n`)).toHaveLength(1);
    }
  });

  it('allows a date made from an argument', async () => {
    const text = 'export const day = (iso: string) => new Date(iso).getTime();\n';
    expect(await objections('src/lib/domain/planted.ts', text)).toEqual([]);
  });

  it('does not bind the server, whose business the clock is', async () => {
    expect(
      await objections('src/lib/server/platform/planted.ts', 'export const now = Date.now();\n')
    ).toEqual([]);
  });
});

describe('roles, transactions and statements stay in their place', () => {
  it.each([
    "export const may = (role: string) => role === 'approver';",
    "export const may = (role: string) => 'auditor' !== role;",
    "export const may = (roles: string[]) => roles.includes('operator');",
    "export const may = (roles: Set<string>) => roles.has('administrator');",
    "export function may(role: string) { switch (role) { case 'method_owner': return 1; } return 0; }"
  ])('no role name is compared outside domain/roles.ts: %s', async (text) => {
    for (const path of [
      'src/lib/domain/planted.ts',
      'src/lib/server/commands/planted.ts',
      'src/routes/planted/+page.ts'
    ]) {
      expect(await objections(path, `${text}\n`)).toEqual(['no-restricted-syntax']);
    }
    expect(await objections('src/lib/domain/roles.ts', `${text}\n`)).toEqual([]);
  });

  it('sees a role compared in the markup of a page', async () => {
    const text = `${script('let { data }: { data: { role: string } } = $props();\n')}\n{#if data.role === 'approver'}yes{/if}\n`;
    expect(await objections('src/routes/planted/+page.svelte', text)).toEqual(['no-restricted-syntax']);
  });

  it('only commands and platform open transactions', async () => {
    const text =
      'export const run = (db: { transaction: (f: () => void) => void }) => db.transaction(() => {});\n';
    expect(await objections('src/lib/server/queries/planted.ts', text)).toEqual(['no-restricted-syntax']);
    expect(await objections('src/routes/planted/+page.server.ts', text)).toEqual(['no-restricted-syntax']);
    expect(await objections('src/lib/server/commands/planted.ts', text)).toEqual([]);
  });

  it('a route writes no statement of its own', async () => {
    const text = 'export const rows = (db: { select: () => unknown }) => db.select();\n';
    expect(await objections('src/routes/planted/+page.server.ts', text)).toEqual(['no-restricted-syntax']);
    expect(await objections('src/lib/server/queries/planted.ts', text)).toEqual([]);
  });
});

describe('the dependency check sees the same floors by following files', () => {
  const root = realpathSync(mkdtempSync(join(tmpdir(), 'wharfinger-floors-')));
  const program = resolve('node_modules/dependency-cruiser/bin/dependency-cruise.mjs');
  afterAll(() => rmSync(root, { recursive: true }));

  /** The rules broken by a small tree of files, given by path and what each imports. */
  function broken(tree: Record<string, string[]>): string[] {
    rmSync(join(root, 'src'), { recursive: true, force: true });
    for (const [path, imports] of Object.entries(tree)) {
      mkdirSync(join(root, dirname(path)), { recursive: true });
      const lines = imports.map(
        (from, i) => `import { value as v${i} } from '${from}';\nconsole.log(v${i});\n`
      );
      writeFileSync(join(root, path), `${lines.join('')}export const value = 1;\n`);
    }
    writeFileSync(join(root, 'tsconfig.json'), '{ "compilerOptions": { "module": "esnext" } }');
    const words = [program, '--config', resolve('.dependency-cruiser.cjs'), '--output-type', 'json', 'src'];
    const { stdout, stderr } = spawnSync(process.execPath, words, { cwd: root, encoding: 'utf8' });
    if (stdout === '') throw new Error(stderr);
    const { summary } = JSON.parse(stdout) as { summary: { violations: { rule: { name: string } }[] } };
    return [...new Set(summary.violations.map((v) => v.rule.name))];
  }

  it.each([
    ['spectra-is-the-lowest', 'src/lib/spectra/a.ts', 'src/lib/identity/b.ts'],
    ['identity-on-spectra', 'src/lib/identity/a.ts', 'src/lib/domain/b.ts'],
    ['domain-on-identity', 'src/lib/domain/a.ts', 'src/lib/server/db/b.ts'],
    ['ui-never-server', 'src/lib/ui/a.ts', 'src/lib/server/queries/b.ts'],
    ['db-on-pure', 'src/lib/server/db/a.ts', 'src/lib/server/platform/b.ts'],
    ['platform-on-db', 'src/lib/server/platform/a.ts', 'src/lib/server/queries/b.ts'],
    ['queries-on-platform', 'src/lib/server/queries/a.ts', 'src/lib/server/commands/b.ts'],
    ['commands-below-routes', 'src/lib/server/commands/a.ts', 'src/lib/ui/b.ts'],
    ['a-command-by-itself', 'src/lib/server/commands/a.ts', 'src/lib/server/commands/b.ts'],
    ['routes-only-the-handle', 'src/routes/+page.server.ts', 'src/lib/server/db/schema.ts'],
    ['sources-only', 'src/lib/ui/a.ts', 'tests/support/b.ts']
  ])('%s', (rule, from, to) => {
    const path = relative(dirname(from), to).replace(/\.ts$/, '');
    expect(broken({ [from]: [path.startsWith('.') ? path : `./${path}`], [to]: [] })).toEqual([rule]);
  });

  it('finds a circle of imports, and a file that is not there', () => {
    const circle = {
      'src/lib/domain/a.ts': ['./b'],
      'src/lib/domain/b.ts': ['./c'],
      'src/lib/domain/c.ts': ['./a']
    };
    expect(broken(circle)).toEqual(['no-cycles']);
    expect(broken({ 'src/lib/domain/a.ts': ['./gone'] })).toEqual(['everything-resolves']);
  });

  it('finds Node in a pure floor', () => {
    expect(broken({ 'src/lib/spectra/a.ts': ['node:fs'] })).toEqual(['pure-floors-without-node']);
  });

  it('has nothing against imports that go down', () => {
    const tree = {
      'src/routes/+page.server.ts': ['../lib/server/commands/lots'],
      'src/lib/server/commands/lots.ts': ['../queries/lots'],
      'src/lib/server/queries/lots.ts': ['../db/client', '../../domain/lots'],
      'src/lib/server/db/client.ts': ['../../domain/lots'],
      'src/lib/domain/lots.ts': ['../identity/decide'],
      'src/lib/identity/decide.ts': ['../spectra/spectrum'],
      'src/lib/spectra/spectrum.ts': []
    };
    expect(broken(tree)).toEqual([]);
  });
});
