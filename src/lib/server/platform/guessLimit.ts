import { RateLimiterMemory } from 'rate-limiter-flexible';

/** Wrong sign-ins from one address in a quarter of an hour; a whole plant may share one address. */
const GUESSES_PER_ADDRESS = 50;
const limiter = new RateLimiterMemory({ points: GUESSES_PER_ADDRESS, duration: 15 * 60 });

/** Whether the address may try to sign in. Each account has its own, narrower limit (signIn.ts). */
export async function guessesLeft(address: string): Promise<boolean> {
  const seen = await limiter.get(address);
  return (seen?.consumedPoints ?? 0) < GUESSES_PER_ADDRESS;
}

/** Counts a wrong sign-in. */
export async function countGuess(address: string): Promise<void> {
  await limiter.penalty(address);
}
