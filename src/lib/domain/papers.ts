/** Largest paper, bytes. */
export const MAX_PAPER_BYTES = 15 * 1024 * 1024;

/** First bytes of the kinds of paper that are taken. */
const HEADS: Readonly<Record<string, readonly number[]>> = {
  'application/pdf': [0x25, 0x50, 0x44, 0x46, 0x2d],
  'image/png': [0x89, 0x50, 0x4e, 0x47],
  'image/jpeg': [0xff, 0xd8, 0xff]
};

/** Media type of a paper, told by its content and not by its name; undefined when it is none that is taken. */
export const paperType = (bytes: Uint8Array): string | undefined =>
  Object.keys(HEADS).find((type) => HEADS[type].every((byte, index) => bytes[index] === byte));
