import { createHmac, timingSafeEqual } from 'node:crypto';

const STEP_S = 30;
const ALPHABET = 'ABCDEFGHIJKLMNOPQRSTUVWXYZ234567';

/** Bytes of a base32 text (RFC 4648), spaces and padding left out. */
function fromBase32(text: string): Buffer {
  const bytes: number[] = [];
  let bits = 0;
  let held = 0;
  for (const character of text.toUpperCase().replaceAll(/[\s=]/g, '')) {
    const value = ALPHABET.indexOf(character);
    if (value < 0) throw new Error('the secret of a one-time code is not base32');
    held = (held << 5) | value;
    bits += 5;
    if (bits < 8) continue;
    bits -= 8;
    bytes.push((held >> bits) & 0xff);
    held &= (1 << bits) - 1;
  }
  return Buffer.from(bytes);
}

/** The six-digit code of a time step: HOTP (RFC 4226) over SHA-1 with the step as counter, which is TOTP (RFC 6238). */
export function oneTimeCode(secret: string, step: number): string {
  const counter = Buffer.alloc(8);
  counter.writeBigUInt64BE(BigInt(step));
  const mac = createHmac('sha1', fromBase32(secret)).update(counter).digest();
  const offset = mac[mac.length - 1] & 0x0f;
  return String((mac.readUInt32BE(offset) & 0x7fffffff) % 1_000_000).padStart(6, '0');
}

/**
 * The time step whose code was given, or null. One step to either side is allowed for clocks and slow hands; a
 * step at or before the last one used is not, so that a code works once.
 */
export function acceptOneTimeCode(
  secret: string,
  given: string,
  lastStep: number | null,
  nowMs: number
): number | null {
  const typed = Buffer.from(given.replaceAll(/\s/g, ''));
  const now = Math.floor(nowMs / 1000 / STEP_S);
  for (const step of [now - 1, now, now + 1]) {
    const right = Buffer.from(oneTimeCode(secret, step));
    if (typed.length === right.length && timingSafeEqual(typed, right))
      return step > (lastStep ?? -1) ? step : null;
  }
  return null;
}
