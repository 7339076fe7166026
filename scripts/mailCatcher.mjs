/**
 * Catches the application's mail on this machine instead of sending it: an SMTP server on the loopback address
 * that keeps each mail as files (see lib/mailFolder.mjs). Started by start.mjs; alone:
 * `node scripts/mailCatcher.mjs <port> <folder>`.
 */
import { SMTPServer } from 'smtp-server';
import { openMailFolder } from './lib/mailFolder.mjs';

const [port, folder] = process.argv.slice(2);
if (!/^\d+$/.test(port ?? '') || !folder) {
  console.error('Usage: node scripts/mailCatcher.mjs <port> <folder>');
  process.exit(2);
}

const LARGEST_MAIL = 40 * 1024 * 1024;
const mails = openMailFolder(folder);
const server = new SMTPServer({
  authOptional: true,
  disabledCommands: ['STARTTLS', 'AUTH'],
  disableReverseLookup: true,
  logger: false,
  size: LARGEST_MAIL,
  onData(stream, session, done) {
    /** @type {Buffer[]} */
    const pieces = [];
    stream.on('data', (/** @type {Buffer} */ piece) => pieces.push(piece));
    stream.on('end', () => {
      try {
        if (stream.sizeExceeded)
          throw Object.assign(new Error('The mail is larger than 40 MB.'), { responseCode: 552 });
        const { mailFrom, rcptTo } = session.envelope;
        const envelope = { from: mailFrom ? mailFrom.address : '', to: rcptTo.map((r) => r.address) };
        done(null, `kept as ${mails.store(Buffer.concat(pieces), envelope, new Date())}`);
      } catch (error) {
        // Told to the sender, whose queue tries again: a mail is not lost to a full disk.
        done(/** @type {Error} */ (error));
      }
    });
  }
});
server.on('error', (error) => {
  console.error(`Mail catcher: ${error.message}`);
  process.exitCode = 1;
});
server.listen(Number(port), '127.0.0.1', () => process.send?.({ ready: true }));

for (const signal of /** @type {const} */ (['SIGTERM', 'SIGINT'])) {
  process.once(signal, () => server.close(() => process.exit(0)));
}
