import { describe, expect, it } from 'vitest';
import { PASSWORD_MAX_LENGTH, PASSWORD_MIN_LENGTH } from '$lib/domain/accounts';
import { passwordFault } from '$lib/domain/passwords';
import { safeNext } from '$lib/domain/safeNext';

const CONTEXT = ['mara.lindqvist', 'Mara Lindqvist', 'Harbour Works', 'Tern Island Medicines'];

describe('R-007: what a password may be (NIST SP 800-63B-4: length and a blocklist, no rule of character classes)', () => {
  it('fifteen characters are enough, fourteen are not, counted as people count them', () => {
    expect(PASSWORD_MIN_LENGTH).toBe(15);
    expect(passwordFault('grey water ben')).toContain('at least 15');
    expect(passwordFault('grey water bend')).toBeNull();
    expect(passwordFault('🜁🜂🜃🜄⚗🝆🝪🜍🜔🜚🜛🝒🝓🝰')).toContain('at least 15');
  });

  it('sixty-four characters and more are accepted, in any script, with spaces', () => {
    expect(passwordFault('Wenn die Möwen landeinwärts fliegen, kommt Sturm von der See her!')).toBeNull();
    expect(passwordFault('かもめが内陸へ飛ぶときは嵐が来る')).toBeNull();
    expect(passwordFault('x1y2z3w4v5'.repeat(21))).toContain(`at most ${PASSWORD_MAX_LENGTH}`);
  });

  it('only small letters are fine, and so is a sentence', () => {
    expect(passwordFault('seven gulls over the mole')).toBeNull();
  });

  it.each([
    ['a word that everybody tries', 'passwordpassword'],
    ['the same with ornaments', 'P-a-s-s-w-o-r-d! 123'],
    ['a row of keys', 'qwertyuiopqwertyuiop'],
    ['a row of digits', '012345678901234567890'],
    ['one character over and over', 'aaaaaaaaaaaaaaaaaaaa'],
    ['two by turns', 'ababababababababababab'],
    ['the product and a year', 'wharfinger-2026'],
    ['the site and a year', 'Harbour Works 2026'],
    ['the own name twice', 'Mara Lindqvist Mara'],
    ['the plant and the product', 'TernIslandMedicinesWharfinger']
  ])('%s is not accepted, and the reason is said', (_what, password) => {
    expect(passwordFault(password, CONTEXT)).toMatch(/^(Too easy to guess|Use more different)/);
  });
});

describe('where to go after signing in', () => {
  it('is where one was, with its query', () => {
    for (const path of ['/lots', '/lots/1?tab=papers', '/trail?who=a%20b#x', '/signings'])
      expect(safeNext(path)).toBe(path);
  });

  it.each([
    '//elsewhere.test',
    '/\\elsewhere.test',
    '\\\\elsewhere.test',
    'https://elsewhere.test',
    'javascript:alert(1)',
    '/a\\b',
    '/lots\r\nset-cookie: x',
    '/\tlots',
    'lots',
    '',
    '/signin',
    '/signin?next=/signin',
    '/signout',
    '/auth/signout',
    '/refused?action=lot.release',
    `/${'x'.repeat(2000)}`
  ])('is never %j', (path) => {
    expect(safeNext(path)).toBe('/');
  });

  it('is the front page where nothing is said', () => {
    expect(safeNext(null)).toBe('/');
    expect(safeNext(undefined)).toBe('/');
  });
});
