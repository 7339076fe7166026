/**
 * Counts single tests over all stages and writes the closing line.
 * @typedef {{ passed: number, failed: number, skipped: number }} Tally
 */

/** @returns {Tally} */
export function emptyTally() {
  return { passed: 0, failed: 0, skipped: 0 };
}

/** @param {readonly Tally[]} tallies @returns {Tally} */
export function addTallies(tallies) {
  return tallies.reduce(
    (sum, t) => ({
      passed: sum.passed + t.passed,
      failed: sum.failed + t.failed,
      skipped: sum.skipped + t.skipped
    }),
    emptyTally()
  );
}

/** A stage that is one check: it passed or it failed. @param {number} exitCode @returns {Tally} */
export function tallyCheck(exitCode) {
  return exitCode === 0 ? { passed: 1, failed: 0, skipped: 0 } : { passed: 0, failed: 1, skipped: 0 };
}

/**
 * Counts a vitest JSON report. A file that failed before its tests were known counts as one failure.
 * @param {{ testResults?: { status: string, assertionResults: { status: string }[] }[] } | null} report null when none was written
 * @param {number} exitCode
 * @param {boolean} [picked] tests were picked by name: the others are not "skipped"
 * @returns {Tally}
 */
export function tallyVitest(report, exitCode, picked = false) {
  const tally = emptyTally();
  for (const file of report?.testResults ?? []) {
    for (const { status } of file.assertionResults) {
      if (status === 'passed') tally.passed += 1;
      else if (status === 'failed') tally.failed += 1;
      else tally.skipped += 1;
    }
    if (file.status === 'failed' && !file.assertionResults.some((a) => a.status === 'failed'))
      tally.failed += 1;
  }
  return heedExitCode(picked ? { ...tally, skipped: 0 } : tally, exitCode);
}

/**
 * Counts a Playwright JSON report. A test that passed only at a repeat ("flaky") counts as failed: tests are not
 * repeated here, so it never should.
 * @param {{ stats?: { expected: number, unexpected: number, flaky: number, skipped: number }, errors?: unknown[] } | null} report
 * @param {number} exitCode
 * @returns {Tally}
 */
export function tallyPlaywright(report, exitCode) {
  const { expected = 0, unexpected = 0, flaky = 0, skipped = 0 } = report?.stats ?? {};
  return heedExitCode({ passed: expected, failed: unexpected + flaky, skipped }, exitCode);
}

/** A stage that ended badly without a failed test (no report, a stray error) counts as one failure. */
function heedExitCode(/** @type {Tally} */ tally, /** @type {number} */ exitCode) {
  return exitCode !== 0 && tally.failed === 0 ? { ...tally, failed: 1 } : tally;
}

/** @param {Tally} tally */
export function closingLine({ passed, failed, skipped }) {
  return `${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}`;
}

/** 0 only when something ran and nothing failed. @param {Tally} tally */
export function exitCodeOf({ passed, failed }) {
  return failed > 0 || passed === 0 ? 1 : 0;
}
