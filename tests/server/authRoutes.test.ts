import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative, sep } from 'node:path';
import { fileURLToPath } from 'node:url';
import ts from 'typescript';
import { describe, expect, it } from 'vitest';
import { routeKey, routePath, routeRule, ROUTE_RULES } from '$lib/domain/routeRules';
import { ROOMS } from '$lib/domain/navigation';

const ROUTES = join(dirname(dirname(dirname(fileURLToPath(import.meta.url)))), 'src', 'routes');
const METHODS = ['GET', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS', 'HEAD', 'fallback'];

/** The value's own property names and the module's exported names, read from the syntax and not by running it. */
function exportsOf(file: string): Map<string, string[]> {
  const source = ts.createSourceFile(file, readFileSync(file, 'utf8'), ts.ScriptTarget.Latest, true);
  const found = new Map<string, string[]>();
  for (const statement of source.statements) {
    const exported =
      ts.canHaveModifiers(statement) &&
      ts.getModifiers(statement)?.some((modifier) => modifier.kind === ts.SyntaxKind.ExportKeyword);
    if (!exported) continue;
    if (ts.isFunctionDeclaration(statement) && statement.name) found.set(statement.name.text, []);
    if (!ts.isVariableStatement(statement)) continue;
    for (const { name, initializer } of statement.declarationList.declarations) {
      const value =
        initializer && (ts.isSatisfiesExpression(initializer) || ts.isAsExpression(initializer))
          ? initializer.expression
          : initializer;
      const members =
        value && ts.isObjectLiteralExpression(value)
          ? value.properties.map((property) => property.name?.getText() ?? '...')
          : [];
      found.set(name.getText(), members);
    }
  }
  return found;
}

/** Every request that the files under src/routes answer, as keys of the table. */
function answeredKeys(): string[] {
  const keys = new Set<string>();
  for (const entry of readdirSync(ROUTES, { recursive: true, withFileTypes: true })) {
    if (!entry.isFile()) continue;
    const routeId = `/${relative(ROUTES, entry.parentPath).split(sep).join('/')}`.replace(/\/$/, '') || '/';
    const file = join(entry.parentPath, entry.name);
    if (/^\+page(@.*)?\.svelte$|^\+page(\.server)?\.ts$/.test(entry.name)) keys.add(routeKey('GET', routeId));
    if (entry.name === '+page.server.ts') {
      for (const action of exportsOf(file).get('actions') ?? [])
        keys.add(routeKey('POST', routeId, action === 'default' ? undefined : action));
    }
    if (entry.name === '+server.ts') {
      for (const method of exportsOf(file).keys())
        if (METHODS.includes(method)) keys.add(routeKey(method, routeId));
    }
  }
  return [...keys].sort();
}

describe('R-003, R-033: the table of routes and the routes themselves', () => {
  const answered = answeredKeys();

  it('every page, form action and API method has a rule: what has none is refused to everybody', () => {
    expect(answered.length).toBeGreaterThan(30);
    expect(answered.filter((key) => !Object.hasOwn(ROUTE_RULES, key))).toEqual([]);
  });

  it('every rule is of a route that there is', () => {
    expect(Object.keys(ROUTE_RULES).filter((key) => !answered.includes(key))).toEqual([]);
  });

  it('every room of the rail is entered under the rule that shows it', () => {
    for (const room of ROOMS)
      expect([room.href, ROUTE_RULES[`GET ${room.href}`]]).toEqual([room.href, room.action]);
  });

  it('what is open to everybody is the door, the link to set a password and the check of a certificate', () => {
    const open = Object.entries(ROUTE_RULES).flatMap(([key, rule]) => (rule === 'public' ? [key] : []));
    expect(open.sort()).toEqual([
      'GET /password/[token]',
      'GET /signin',
      'GET /verify/[code]',
      'POST /password/[token]',
      'POST /signin',
      'POST /signout'
    ]);
  });
});

describe('keys', () => {
  it('leave out groups and matchers, and take HEAD for GET', () => {
    expect(routePath('/(app)/lots/[id=uuid]/papers/[paper=uuid]')).toBe('/lots/[id]/papers/[paper]');
    expect(routePath('/(app)')).toBe('/');
    expect(routePath('/(app)/(desk)/[...rest]/[[page=integer]]')).toBe('/[...rest]/[[page]]');
    expect(routeKey('HEAD', '/(app)/lots')).toBe('GET /lots');
  });

  it('of the prototype are no rules', () => {
    expect(routeRule('GET', 'constructor')).toBeNull();
    expect(routeRule('__proto__', '')).toBeNull();
  });
});
