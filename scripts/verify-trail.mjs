#!/usr/bin/env node
/**
 * Checks an exported audit trail, away from the application and its database: it needs this one file and Node.
 *
 *     node verify-trail.mjs EXPORT.ndjson [--heads TREE-HEADS.ndjson] [--key PUBLIC-KEY] [--list]
 *
 * It recomputes the hash of every entry and the Merkle tree over them (RFC 6962), compares the tree's root with
 * the signed head in the export, and checks that signature (Ed25519). What it cannot know alone is whether the key
 * is yours: compare the key's id that it prints with the one you were given, or say --key (the key in base64, or
 * the name of a file with it). With --heads it compares the trail with tree heads that were kept elsewhere, which
 * is the only way to notice that the end was cut off or that everything was rewritten. --list prints the entries
 * as sentences. Exit code 0: all as it should be; 1: not so; 2: it could not be read.
 */
import { createHash, createPublicKey, verify } from 'node:crypto';
import { createReadStream, existsSync, readFileSync, realpathSync } from 'node:fs';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';

/**
 * @typedef {{ size: number, rootHash: string, at: string, keyId: string, signature: string, publicKey: string | null }} Head
 * @typedef {{ ok: boolean, entries: number, scope: string, head: Head | null, faults: string[] }} Result
 * @typedef {{ heads?: Head[], key?: string, onEntry?: (entry: Record<string, unknown>) => void }} Options
 */

const sha256 = (/** @type {(Buffer | Uint8Array)[]} */ ...parts) =>
  createHash('sha256').update(Buffer.concat(parts)).digest();
const leafOf = (/** @type {string} */ content) => sha256(Buffer.of(0), Buffer.from(content));
const nodeOf = (/** @type {Buffer} */ left, /** @type {Buffer} */ right) => sha256(Buffer.of(1), left, right);
const half = (/** @type {number} */ n) => Math.floor(n / 2);
const hashPattern = /^[0-9a-f]{64}$/;
const isHash = (/** @type {unknown} */ text) => typeof text === 'string' && hashPattern.test(text);
const isCount = (/** @type {unknown} */ n) => Number.isSafeInteger(n) && Number(n) >= 0;

/** A tree that remembers its right edge only. */
class Tree {
  size = 0;
  /** @type {{ height: number, hash: Buffer }[]} */
  edge = [];
  append(/** @type {Buffer} */ leaf) {
    let node = { height: 0, hash: leaf };
    this.size += 1;
    for (let left = this.edge.at(-1); left && left.height === node.height; left = this.edge.at(-1)) {
      this.edge.pop();
      node = { height: node.height + 1, hash: nodeOf(left.hash, node.hash) };
    }
    this.edge.push(node);
  }
  root() {
    const hashes = this.edge.map((node) => node.hash);
    const root = hashes.length === 0 ? sha256() : hashes.reduceRight((right, left) => nodeOf(left, right));
    return root.toString('hex');
  }
}

/** RFC 9162, section 2.1.3.2. @param {Buffer} leaf @param {number} index @param {number} size @param {string[]} proof @param {string} root */
function isIncluded(leaf, index, size, proof, root) {
  if (!isCount(index) || !isCount(size) || index >= size) return false;
  let [node, last, hash] = [index, size - 1, leaf];
  for (const text of proof) {
    if (last === 0 || !isHash(text)) return false;
    const sibling = Buffer.from(text, 'hex');
    if (node % 2 === 1 || node === last) {
      hash = nodeOf(sibling, hash);
      while (node % 2 === 0 && node !== 0) [node, last] = [half(node), half(last)];
    } else {
      hash = nodeOf(hash, sibling);
    }
    [node, last] = [half(node), half(last)];
  }
  return last === 0 && hash.toString('hex') === root;
}

const keyIdOf = (/** @type {string} */ publicKey) =>
  sha256(Buffer.from(publicKey, 'base64')).toString('hex').slice(0, 16);

/** Why the head is not signed by the key, or null. @param {Head} head @param {string} publicKey */
function signatureFault(head, publicKey) {
  if (keyIdOf(publicKey) !== head.keyId) return 'names another key than the one given';
  const text = `wharfinger tree head v1\n${head.size}\n${head.rootHash}\n${head.at}\n${head.keyId}\n`;
  try {
    const key = createPublicKey({ key: Buffer.from(publicKey, 'base64'), format: 'der', type: 'spki' });
    const right = verify(null, Buffer.from(text), key, Buffer.from(head.signature, 'base64'));
    return right ? null : 'has a signature that is not right';
  } catch {
    return 'has a key that cannot be read';
  }
}

/** @param {string} line @returns {Record<string, any> | null} */
function parsed(line) {
  try {
    const value = JSON.parse(line);
    // The line must be exactly what was written: another spelling of the same values is not the export.
    return value !== null && typeof value === 'object' && JSON.stringify(value) === line ? value : null;
  } catch {
    return null;
  }
}

/** @param {unknown} value @returns {value is Head} */
function isHead(value) {
  if (typeof value !== 'object' || value === null) return false;
  const { size, rootHash, at, keyId, signature } = /** @type {Head} */ (value);
  const texts = [at, keyId, signature].every((text) => typeof text === 'string');
  return texts && isCount(size) && isHash(rootHash);
}

/** One reading of an export: fed line by line, it gathers what is not right. */
class ExportCheck {
  tree = new Tree();
  digest = createHash('sha256');
  /** @type {string[]} */
  faults = [];
  /** @type {Head | null} */
  head = null;
  scope = '';
  entries = 0;
  lastIndex = -1;
  ended = false;

  /** @param {Options} options */
  constructor({ heads = [], key, onEntry }) {
    this.heads = heads;
    this.bySize = new Map(heads.map((head) => [head.size, head]));
    this.key = key;
    this.onEntry = onEntry;
  }

  fault(/** @type {string} */ sentence) {
    if (this.faults.length < 20) this.faults.push(sentence);
  }

  read(/** @type {string} */ line, /** @type {number} */ number) {
    const value = parsed(line);
    if (number === 1) this.readHeader(value);
    else if (this.ended) this.fault(`Line ${number} stands after the end.`);
    else if (value?.kind === 'entry' && this.head) this.readEntry(value, number, this.head);
    else if (value?.kind === 'end') this.readEnd(value);
    else this.fault(`Line ${number} is not a line of an exported audit trail.`);
    if (!this.ended) this.digest.update(`${line}\n`);
  }

  readHeader(/** @type {Record<string, any> | null} */ value) {
    const known = value?.kind === 'wharfinger-trail-export' && value.version === 1 && isHead(value.head);
    if (!known || !['whole', 'selection'].includes(value.scope)) {
      return this.fault('This is no exported audit trail, or its first line was changed.');
    }
    this.head = value.head;
    this.scope = value.scope;
  }

  /** @param {Record<string, any>} value @param {number} number @param {Head} head */
  readEntry({ content, leafIndex, proof }, number, head) {
    this.entries += 1;
    const entry = readContent(content);
    const name = entry ? `Entry ${entry.id}` : `The entry in line ${number}`;
    if (!entry) return this.fault(`${name} has no readable content.`);
    this.onEntry?.(entry);
    const next = this.lastIndex + 1;
    if (!isCount(leafIndex) || leafIndex < next) this.fault(`${name} is out of order.`);
    else if (this.scope === 'whole' && leafIndex > next)
      this.fault(`Leaf ${next} before ${name} is missing.`);
    this.lastIndex = leafIndex;
    const leaf = leafOf(content);
    if (this.scope === 'whole') return this.grow(leaf);
    if (!Array.isArray(proof) || !isIncluded(leaf, leafIndex, head.size, proof, head.rootHash)) {
      this.fault(`${name} was changed: its proof does not lead to the signed root.`);
    }
  }

  grow(/** @type {Buffer} */ leaf) {
    this.tree.append(leaf);
    const kept = this.bySize.get(this.tree.size);
    if (kept && kept.rootHash !== this.tree.root()) {
      this.fault(`The first ${kept.size} entries are not those of the tree head kept elsewhere.`);
    }
  }

  readEnd(/** @type {Record<string, any>} */ value) {
    this.ended = true;
    const { entries } = this;
    if (value.entries !== entries) this.fault(`It tells of ${value.entries} entries; here are ${entries}.`);
    if (value.sha256 !== this.digest.digest('hex'))
      this.fault('The lines differ from those written (SHA-256).');
  }

  /** @returns {Result} */
  result() {
    const { head, entries, scope } = this;
    if (head) this.checkHead(head);
    else if (this.faults.length === 0) this.fault('The file is empty.');
    if (head && !this.ended) this.fault('The export ends before its last line: it was cut short.');
    return { ok: this.faults.length === 0, entries, scope, head, faults: this.faults };
  }

  checkHead(/** @type {Head} */ head) {
    const whole = this.scope === 'whole';
    const { size } = this.tree;
    if (whole && size !== head.size) this.fault(`The head tells of ${head.size} entries; here are ${size}.`);
    else if (whole && this.tree.root() !== head.rootHash) this.fault('The entries differ from those sealed.');
    const publicKey = this.key ?? head.publicKey;
    const wrong = publicKey ? signatureFault(head, publicKey) : 'needs its public key: give it with --key';
    if (wrong) this.fault(`The tree head ${wrong}.`);
    for (const kept of this.heads) {
      const faulty = kept.publicKey && signatureFault(kept, kept.publicKey);
      if (faulty) this.fault(`The tree head kept elsewhere of ${kept.at} ${faulty}.`);
      if (whole && kept.size > size)
        this.fault(`A tree head kept elsewhere tells of ${kept.size} entries: the end is missing.`);
      if (!whole && kept.size === head.size && kept.rootHash !== head.rootHash)
        this.fault(`The tree head differs from that kept elsewhere of ${kept.at}.`);
    }
  }
}

/**
 * Checks an export.
 * @param {AsyncIterable<string> | Iterable<string>} lines without their line feeds @param {Options} [options]
 * @returns {Promise<Result>}
 */
export async function verifyExport(lines, options = {}) {
  const check = new ExportCheck(options);
  let number = 0;
  for await (const line of lines) check.read(line, (number += 1));
  return check.result();
}

/** @param {unknown} content @returns {Record<string, unknown> | null} */
function readContent(content) {
  if (typeof content !== 'string') return null;
  try {
    const value = JSON.parse(content);
    return value && typeof value === 'object' && 'id' in value ? value : null;
  } catch {
    return null;
  }
}

/** An entry as a line to read. @param {Record<string, unknown>} entry */
function sentence(entry) {
  const reason = entry.reason ? `, because: ${entry.reason}` : '';
  return `${entry.at}  ${entry.id}  ${entry.actorName} (${entry.actorRole})  ${entry.action}  ${entry.recordLabel}${reason}`;
}

/** @param {string} file @returns {Head[]} */
function readHeadsFile(file) {
  return readFileSync(file, 'utf8')
    .split('\n')
    .filter(Boolean)
    .map((line) => {
      const head = parsed(line);
      if (!isHead(head)) throw new Error(`${file} holds a line that is not a tree head`);
      return head;
    });
}

/** The key as given, or from a file in base64 or PEM. @param {string} given */
function readKey(given) {
  if (!existsSync(given)) return given;
  const text = readFileSync(given, 'utf8').trim();
  if (!text.startsWith('-----')) return text;
  return createPublicKey(text).export({ type: 'spki', format: 'der' }).toString('base64');
}

/** @param {string[]} args */
async function main(args) {
  const text = /** @type {const} */ ({ type: 'string' });
  const options = { heads: text, key: text, list: /** @type {const} */ ({ type: 'boolean' }) };
  const { values, positionals } = parseArgs({ args, allowPositionals: true, options });
  if (positionals.length !== 1) throw new Error('name one exported file');
  const heads = values.heads ? readHeadsFile(values.heads) : [];
  const key = values.key ? readKey(values.key) : undefined;
  const lines = createInterface({ input: createReadStream(positionals[0]), crlfDelay: Infinity });
  const onEntry = (/** @type {Record<string, unknown>} */ entry) =>
    values.list && console.log(sentence(entry));
  const { ok, scope, entries, head, faults } = await verifyExport(lines, { heads, key, onEntry });
  for (const found of faults) console.log(`NOT RIGHT: ${found}`);
  if (!ok) return 1;
  const all = scope === 'whole' ? `all ${entries} entries` : `${entries} chosen of ${head?.size} entries`;
  console.log(`RIGHT: ${all}, sealed at ${head?.at} under ${head?.rootHash}`);
  console.log(`Signed with key ${head?.keyId}${key ? '' : ': compare it with the one you were given'}.`);
  if (heads.length === 0)
    console.log('Compared with no other tree head (--heads): a cut end would not be seen.');
  return 0;
}

if (process.argv[1] && realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  try {
    process.exitCode = await main(process.argv.slice(2));
  } catch (error) {
    console.error(`It could not be checked: ${error instanceof Error ? error.message : error}`);
    process.exitCode = 2;
  }
}
