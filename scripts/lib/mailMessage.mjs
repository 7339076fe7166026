/**
 * Reads what a person wants to see of a mail: who, to whom, about what, and the plain text. It reads the forms
 * that mail programs write for text (RFC 5322 headers, RFC 2047 words, base64 and quoted-printable bodies, the
 * first text/plain part of a multipart); the raw mail is kept beside it for everything else.
 *
 * @param {Buffer} raw
 * @returns {{ from: string, to: string, subject: string, date: string, text: string }}
 */
export function readMessage(raw) {
  // latin1 keeps every byte as one character until its charset is known.
  const { headers, body } = splitPart(raw.toString('latin1'));
  return {
    from: decodeWords(headers.get('from') ?? ''),
    to: decodeWords(headers.get('to') ?? ''),
    subject: decodeWords(headers.get('subject') ?? ''),
    date: headers.get('date') ?? '',
    text: textOf(headers, body) ?? ''
  };
}

/** @param {string} part @returns {{ headers: Map<string, string>, body: string }} header names in lower case */
function splitPart(part) {
  const cut = /\r?\n\r?\n/.exec(part);
  const head = cut ? part.slice(0, cut.index) : part;
  /** @type {Map<string, string>} */
  const headers = new Map();
  for (const line of head.replace(/\r?\n[ \t]+/g, ' ').split(/\r?\n/)) {
    const colon = line.indexOf(':');
    if (colon > 0) headers.set(line.slice(0, colon).toLowerCase(), line.slice(colon + 1).trim());
  }
  return { headers, body: cut ? part.slice(cut.index + cut[0].length) : '' };
}

/** @param {Map<string, string>} headers @param {string} body @returns {string | null} null where it is no text */
function textOf(headers, body) {
  const type = headers.get('content-type') ?? 'text/plain';
  const boundary = /^multipart\//i.test(type) ? /boundary="?([^";]+)"?/i.exec(type)?.[1] : undefined;
  if (boundary !== undefined) {
    for (const part of body.split(`--${boundary}`).slice(1)) {
      const inner = splitPart(part.replace(/^\r?\n/, ''));
      const text = part.startsWith('--') ? null : textOf(inner.headers, inner.body);
      if (text !== null) return text;
    }
    return null;
  }
  if (!/^text\/plain/i.test(type)) return null;
  const charset = /charset="?([^";\s]+)"?/i.exec(type)?.[1] ?? 'utf-8';
  const bytes = decodeTransfer(body, (headers.get('content-transfer-encoding') ?? '').toLowerCase());
  return decodeCharset(bytes, charset).replaceAll('\r\n', '\n').trimEnd();
}

/** @param {string} body @param {string} encoding */
function decodeTransfer(body, encoding) {
  if (encoding === 'base64') return Buffer.from(body, 'base64');
  if (encoding === 'quoted-printable') return decodeQuoted(body.replace(/[ \t]*=\r?\n/g, ''));
  return Buffer.from(body, 'latin1');
}

/** @param {string} text */
function decodeQuoted(text) {
  const plain = text.replace(/=([0-9a-f]{2})/gi, (_, hex) => String.fromCharCode(parseInt(hex, 16)));
  return Buffer.from(plain, 'latin1');
}

/** @param {Buffer} bytes @param {string} charset */
function decodeCharset(bytes, charset) {
  try {
    return new TextDecoder(charset).decode(bytes);
  } catch {
    return bytes.toString('utf8');
  }
}

/** RFC 2047 encoded words in a header. @param {string} header */
function decodeWords(header) {
  const joined = header.replace(/\?=\s+=\?/g, '?==?');
  const decoded = joined.replace(/=\?([^?]+)\?([bq])\?([^?]*)\?=/gi, (_, charset, kind, text) => {
    const bytes =
      kind.toLowerCase() === 'b' ? Buffer.from(text, 'base64') : decodeQuoted(text.replaceAll('_', ' '));
    return decodeCharset(bytes, charset);
  });
  // A header without encoded words may hold bare UTF-8.
  return decoded === header ? Buffer.from(header, 'latin1').toString('utf8') : decoded;
}
