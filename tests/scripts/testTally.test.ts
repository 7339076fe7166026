import { describe, expect, it } from 'vitest';
import { chooseStages } from '../../scripts/lib/testStages.mjs';
import {
  addTallies,
  closingLine,
  exitCodeOf,
  tallyCheck,
  tallyPlaywright,
  tallyVitest
} from '../../scripts/lib/testTally.mjs';

const file = (status: string, ...tests: string[]) => ({
  status,
  assertionResults: tests.map((t) => ({ status: t }))
});

describe('counting tests', () => {
  it('counts single tests of a vitest report', () => {
    const report = {
      testResults: [file('failed', 'passed', 'failed'), file('passed', 'passed', 'pending', 'todo')]
    };
    expect(tallyVitest(report, 1)).toEqual({ passed: 2, failed: 1, skipped: 2 });
  });

  it('counts a file that could not be loaded as a failure', () => {
    expect(tallyVitest({ testResults: [file('failed')] }, 1)).toEqual({ passed: 0, failed: 1, skipped: 0 });
  });

  it('counts a stray error after passing tests as a failure', () => {
    expect(tallyVitest({ testResults: [file('passed', 'passed')] }, 1).failed).toBe(1);
  });

  it('counts a missing report as a failure when the program failed', () => {
    expect(tallyVitest(null, 1)).toEqual({ passed: 0, failed: 1, skipped: 0 });
    expect(tallyPlaywright(null, 1)).toEqual({ passed: 0, failed: 1, skipped: 0 });
  });

  it('does not call tests skipped that were not picked by name', () => {
    expect(tallyVitest({ testResults: [file('passed', 'passed', 'skipped')] }, 0, true).skipped).toBe(0);
  });

  it('counts a browser test that passed only at a repeat as failed', () => {
    const stats = { expected: 3, unexpected: 1, flaky: 1, skipped: 2 };
    expect(tallyPlaywright({ stats }, 1)).toEqual({ passed: 3, failed: 2, skipped: 2 });
  });

  it('closes with one line that names skipped tests only when there are any', () => {
    const total = addTallies([tallyCheck(0), tallyCheck(1), { passed: 5, failed: 0, skipped: 0 }]);
    expect(closingLine(total)).toBe('6 passed, 1 failed');
    expect(closingLine({ ...total, skipped: 3 })).toBe('6 passed, 1 failed, 3 skipped');
  });

  it('fails when anything failed, and when nothing ran', () => {
    expect(exitCodeOf({ passed: 9, failed: 0, skipped: 0 })).toBe(0);
    expect(exitCodeOf({ passed: 9, failed: 1, skipped: 0 })).toBe(1);
    expect(exitCodeOf({ passed: 0, failed: 0, skipped: 4 })).toBe(1);
  });
});

describe('choosing stages', () => {
  const names = (choice: { only?: string; pattern?: string }) => chooseStages(choice).map((s) => s.name);

  it('runs everything unless told otherwise, quick checks first', () => {
    expect(names({})).toEqual(['format', 'lint', 'imports', 'check', 'unit', 'build', 'server', 'pages']);
  });

  it('builds before what runs the built application, also when only that is asked for', () => {
    expect(names({ only: 'pages' })).toEqual(['build', 'pages']);
    expect(names({ only: 'server' })).toEqual(['build', 'server']);
    expect(names({ only: 'unit', pattern: 'quarantine' })).toEqual(['unit']);
  });

  it('leaves out what holds no named tests when picking by name', () => {
    expect(names({ pattern: 'quarantine' })).toEqual(['unit', 'build', 'server', 'pages']);
    expect(names({ only: 'lint', pattern: 'quarantine' })).toEqual([]);
  });
});
