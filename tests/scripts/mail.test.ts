import { mkdtempSync, readFileSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createTransport } from 'nodemailer';
import { describe, expect, it } from 'vitest';
import { startMailCatcher } from '../../scripts/lib/application.mjs';
import { readMessage } from '../../scripts/lib/mailMessage.mjs';
import { findFreePort } from '../../scripts/lib/ports.mjs';
import { stopChild } from '../../scripts/lib/processes.mjs';

const raw = (...lines: string[]) => Buffer.from(lines.join('\r\n'), 'utf8');

describe('reading a mail', () => {
  it('reads plain headers and text', () => {
    const mail = readMessage(
      raw('From: a@tern.example', 'To: b@tern.example', 'Subject: Tree head', '', 'Size 12.')
    );
    expect(mail).toEqual({
      from: 'a@tern.example',
      to: 'b@tern.example',
      subject: 'Tree head',
      date: '',
      text: 'Size 12.'
    });
  });

  it('joins folded headers and decodes encoded words, also split ones', () => {
    const mail = readMessage(raw('Subject: =?UTF-8?Q?Fr=C3=BCh?=', ' =?UTF-8?B?w6R0dA==?= here', '', ''));
    expect(mail.subject).toBe('Früh\u00e4tt here');
  });

  it('decodes quoted-printable with soft line breaks, and base64', () => {
    const quoted = [
      'Content-Type: text/plain; charset=utf-8',
      'Content-Transfer-Encoding: quoted-printable',
      ''
    ];
    expect(readMessage(raw(...quoted, 'one =E2=88=92 tw=', 'o')).text).toBe('one \u2212 two');
    const base64 = [
      'Content-Type: text/plain; charset="iso-8859-1"',
      'Content-Transfer-Encoding: base64',
      ''
    ];
    expect(readMessage(raw(...base64, Buffer.from('caf\u00e9', 'latin1').toString('base64'))).text).toBe(
      'caf\u00e9'
    );
  });

  it('takes the plain text out of nested parts and leaves attachments alone', () => {
    const mail = raw(
      'Content-Type: multipart/mixed; boundary="outer"',
      '',
      '--outer',
      'Content-Type: multipart/alternative; boundary="inner"',
      '',
      '--inner',
      'Content-Type: text/html',
      '',
      '<p>marked up</p>',
      '--inner',
      'Content-Type: text/plain',
      '',
      'the text',
      '--inner--',
      '--outer',
      'Content-Type: application/pdf',
      '',
      'PDF',
      '--outer--'
    );
    expect(readMessage(mail).text).toBe('the text');
  });
});

describe('the mail catcher', () => {
  it('keeps each mail as it came, beside what a page shows of it', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'wharfinger-mail-'));
    const port = await findFreePort();
    const running = await startMailCatcher({ root: process.cwd(), port, folder });
    try {
      const sender = createTransport(`smtp://127.0.0.1:${port}`);
      for (const subject of ['First − mail', 'Second']) {
        const text = `About lot L-1, ${subject}.\nIts café is closed.`;
        await sender.sendMail({ from: 'quay@tern.example', to: 'qa@tern.example', subject, text });
      }
      const kept = readdirSync(folder)
        .filter((name) => name.endsWith('.json'))
        .sort();
      expect(kept).toHaveLength(2);
      const first = JSON.parse(readFileSync(join(folder, kept[0]), 'utf8'));
      expect(first).toMatchObject({
        envelope: { from: 'quay@tern.example', to: ['qa@tern.example'] },
        subject: 'First − mail',
        text: 'About lot L-1, First − mail.\nIts café is closed.'
      });
      expect(readFileSync(join(folder, first.file), 'utf8')).toContain('Subject: =?UTF-8?');
    } finally {
      await stopChild(running, 5000);
      rmSync(folder, { recursive: true });
    }
    expect(running.child.exitCode).toBe(0);
  });
});
