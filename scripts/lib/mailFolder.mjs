import { mkdirSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { readMessage } from './mailMessage.mjs';

/**
 * Keeps mails as files: `<time>-<number>.eml` as it came, and `.json` with what a page shows of it:
 * `{ id, receivedAt, envelope: { from, to: string[] }, from, to, subject, date, text, file }`. The .json is
 * written last and by renaming, so whoever sees it can read both.
 * @param {string} folder
 */
export function openMailFolder(folder) {
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  let count = 0;
  return {
    /**
     * @param {Buffer} raw @param {{ from: string, to: string[] }} envelope @param {Date} now
     * @returns {string} the mail's id
     */
    store(raw, envelope, now) {
      count += 1;
      const receivedAt = now.toISOString();
      const id = `${receivedAt.replace(/[-:.]/g, '')}-${process.pid}-${count}`;
      const file = `${id}.eml`;
      writeFileSync(join(folder, file), raw, { mode: 0o600 });
      const shown = { id, receivedAt, envelope, ...readMessage(raw), file };
      writeFileSync(join(folder, `${id}.new`), `${JSON.stringify(shown, null, 2)}\n`, { mode: 0o600 });
      renameSync(join(folder, `${id}.new`), join(folder, `${id}.json`));
      return id;
    }
  };
}
