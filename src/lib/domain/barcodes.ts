/**
 * The product's own container code, printed on its labels: `WH1C`, the lot number without hyphens, a dash,
 * the container number in four digits, and a check character over all of it (ISO/IEC 7064 MOD 37-2 family,
 * here MOD 37 with weights 2^n, alphabet 0-9 A-Z *).
 *
 * Example: container 3 of lot L-2026-0007 is `WH1CL20260007-0003` followed by its check character.
 */
const ALPHABET = '0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZ*';

/** ISO/IEC 7064 MOD 37-2 check character of the letters and digits of a text. */
export function checkCharacter(text: string): string {
  let sum = 0;
  for (const character of text) {
    const value = ALPHABET.indexOf(character);
    if (value < 0 || value > 35) continue;
    sum = ((sum + value) * 2) % 37;
  }
  return ALPHABET[(38 - sum) % 37];
}

/** Code of container `number` of a lot. */
export function containerBarcode(lotNumber: string, number: number): string {
  const body = `WH1C${lotNumber.replaceAll('-', '')}-${String(number).padStart(4, '0')}`;
  return body + checkCharacter(body);
}

/** A scanned or typed code with stray spaces and case made even. */
export const normaliseBarcode = (text: string): string => text.trim().replaceAll(/\s+/g, '').toUpperCase();

/** What is wrong with a container code, in a sentence, or null when its form and check character are right. */
export function barcodeFault(code: string): string | null {
  if (code === '') return 'Scan or type the code on the container label.';
  if (!/^WH1C[A-Z0-9]{3,20}-\d{4}[0-9A-Z*]$/.test(code)) {
    return 'This is not a container code. Scan the square code on the Wharfinger label of the drum.';
  }
  if (checkCharacter(code.slice(0, -1)) !== code.slice(-1)) {
    return 'The code was misread or mistyped: its check character does not fit. Scan it again.';
  }
  return null;
}
