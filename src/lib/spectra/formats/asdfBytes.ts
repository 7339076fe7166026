/** What a byte is: bits 0-3 the digit that a letter stands for, then its form and sign; or what splits ordinates. */
export const DIGIT = 0x0f;
export const SQZ = 0x10;
export const DIF = 0x20;
export const DUP = 0x40;
export const NEGATIVE = 0x80;
/** A letter that may also begin the word `NaN` or `Inf`. */
export const LETTER = 0x100;
export const GAP = 0x200;
export const LINE_END = 0x400;
export const KIND = kindsOfBytes();

function kindsOfBytes(): Uint16Array {
  const kind = new Uint16Array(256);
  const set = (letters: string, first: number, flags: number) => {
    for (let i = 0; i < letters.length; i++) kind[letters.charCodeAt(i)] = (first + i) | flags;
  };
  set('@ABCDEFGHI', 0, SQZ);
  set('abcdefghi', 1, SQZ | NEGATIVE);
  set('%JKLMNOPQR', 0, DIF);
  set('jklmnopqr', 1, DIF | NEGATIVE);
  set('STUVWXYZ', 1, DUP);
  set('s', 9, DUP);
  for (const letter of 'NnIi') kind[letter.charCodeAt(0)] |= LETTER;
  for (const byte of [0x20, 0x09, 0x2c]) kind[byte] = GAP;
  for (const byte of [0x0a, 0x0d]) kind[byte] = LINE_END;
  return kind;
}
