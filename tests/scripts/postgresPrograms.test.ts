import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { withoutMainCluster } from '../../scripts/lib/debianPackages.mjs';
import {
  choosePrograms,
  foldersToSearch,
  missingPostgresSentence,
  readMajor
} from '../../scripts/lib/postgresPrograms.mjs';

describe("finding PostgreSQL's programs", () => {
  const thirteen = { folder: '/x/13/bin', major: 13 };
  const fifteen = { folder: '/x/15/bin', major: 15 };
  const seventeen = { folder: '/x/17/bin', major: 17 };

  it.each([
    ['postgres (PostgreSQL) 15.14 (Debian 15.14-0+deb12u1)', 15],
    ['postgres (PostgreSQL) 9.6.24', 9],
    ['postgres (PostgreSQL) 18beta1', 18],
    ['bash: postgres: command not found', null]
  ])('reads the major version of "%s"', (text, major) => {
    expect(readMajor(text)).toBe(major);
  });

  it('takes the newest that is new enough', () => {
    expect(choosePrograms([thirteen, fifteen, seventeen])).toBe(seventeen);
    expect(choosePrograms([thirteen])).toBeNull();
    expect(choosePrograms([])).toBeNull();
  });

  it('takes for an existing cluster the version that made it and no other', () => {
    expect(choosePrograms([fifteen, seventeen], 15)).toBe(fifteen);
    expect(choosePrograms([seventeen], 15)).toBeNull();
  });

  it('looks through the folder of Debian and the search path, only where all programs are', () => {
    const base = mkdtempSync(join(tmpdir(), 'wharfinger-programs-'));
    const make = (folder: string, names: string[]) => {
      mkdirSync(join(base, folder), { recursive: true });
      for (const name of names) writeFileSync(join(base, folder, name), '');
    };
    make('debian/15/bin', ['initdb', 'pg_ctl', 'postgres']);
    make('debian/14/bin', ['psql']);
    make('own', ['initdb', 'pg_ctl', 'postgres']);
    make('empty', []);
    const path = [join(base, 'empty'), join(base, 'own'), ''].join(':');
    const found = foldersToSearch(join(base, 'debian'), path);
    expect(found).toEqual([join(base, 'debian/15/bin'), join(base, 'own')]);
    expect(foldersToSearch(join(base, 'absent'), '')).toEqual([]);
    rmSync(base, { recursive: true });
  });

  it('tells a user who is not root the one command to run', () => {
    expect(missingPostgresSentence()).toContain('sudo apt-get update && sudo apt-get install -y postgresql');
    expect(missingPostgresSentence()).toContain('Nothing was changed');
  });

  it.each([
    ['', 'create_main_cluster = false\n'],
    ['#create_main_cluster = true\nstart_conf = auto\n', 'start_conf = auto\ncreate_main_cluster = false\n'],
    ['create_main_cluster = true', 'create_main_cluster = false\n'],
    ['create_main_cluster = false\n', 'create_main_cluster = false\n']
  ])("turns Debian's shared cluster off in %j and keeps the rest", (before, after) => {
    expect(withoutMainCluster(before)).toBe(after);
  });
});
