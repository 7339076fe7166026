import type { Outcome } from '../../src/lib/domain/refusals';

/** The value of a command that must not be refused while the demo is made. */
export function must<T>(outcome: Outcome<T>): T {
  if (outcome.ok) return outcome.value;
  throw new Error(
    `the demo met a refusal (${outcome.code}): ${outcome.detail} ${JSON.stringify(outcome.fields ?? {})}`
  );
}
