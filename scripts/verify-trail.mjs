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

/**
 * @typedef {{ size: number, rootHash: string, at: string, keyId: string, signature: string, publicKey: string | null }} Head
 * @typedef {{ ok: boolean, entries: number, scope: string, keyId: string, head: Head | null, faults: string[] }} Result
 * @typedef {{ heads?: Head[], key?: string, onEntry?: (entry: Record<string, unknown>) => void }} Options
 */

const sha256 = (/** @type {(Buffer | Uint8Array)[]} */ ...parts) =>
  createHash('sha256').update(Buffer.concat(parts)).digest();
const leafOf = (/** @type {string} */ content) => sha256(Buffer.of(0), Buffer.from(content));
const nodeOf = (/** @type {Buffer} */ left, /** @type {Buffer} */ right) => sha256(Buffer.of(1), left, right);
const half = (/** @type {number} */ n) => Math.floor(n / 2);
const isHash = (/** @type {unknown} */ text) => typeof text === 'string' && /^[0-9a-f]{64}$/.test(text);
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
    if (this.edge.length === 0) return sha256(Buffer.alloc(0)).toString('hex');
    return this.edge
      .map((node) => node.hash)
      .reduceRight((right, left) => nodeOf(left, right))
      .toString('hex');
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
    return verify(null, Buffer.from(text), key, Buffer.from(head.signature, 'base64'))
      ? null
      : 'has a signature that is not right';
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
  const head = /** @type {Head} */ (value);
  return (
    typeof head === 'object' &&
    head !== null &&
    isCount(head.size) &&
    isHash(head.rootHash) &&
    [head.at, head.keyId, head.signature].every((text) => typeof text === 'string')
  );
}

/**
 * Checks an export, line by line.
 * @param {AsyncIterable<string> | Iterable<string>} lines without their line feeds @param {Options} [options]
 * @returns {Promise<Result>}
 */
export async function verifyExport(lines, { heads = [], key, onEntry } = {}) {
  /** @type {string[]} */
  const faults = [];
  const fault = (/** @type {string} */ sentence) => void (faults.length < 20 && faults.push(sentence));
  const tree = new Tree();
  const digest = createHash('sha256');
  const sizes = new Map(heads.map((head) => [head.size, head]));
  /** @type {Head | null} */
  let head = null;
  let scope = '';
  let entries = 0;
  let lastIndex = -1;
  let ended = false;
  let number = 0;
  for await (const line of lines) {
    number += 1;
    if (ended) {
      fault(`Line ${number} stands after the end.`);
      break;
    }
    const value = parsed(line);
    if (number === 1) {
      if (
        value?.kind !== 'wharfinger-trail-export' ||
        value.version !== 1 ||
        !['whole', 'selection'].includes(value.scope) ||
        !isHead(value.head)
      ) {
        return {
          ok: false,
          entries: 0,
          scope: '',
          keyId: '',
          head: null,
          faults: ['The file is not an exported audit trail, or its first line was changed.']
        };
      }
      ({ head, scope } = /** @type {{ head: Head, scope: string }} */ (value));
    } else if (value?.kind === 'entry' && head) {
      entries += 1;
      checkEntry(value, number, head);
    } else if (value?.kind === 'end') {
      ended = true;
      if (value.entries !== entries)
        fault(`The export says that it holds ${value.entries} entries; it holds ${entries}.`);
      if (value.sha256 !== digest.digest('hex'))
        fault('The lines of the export are not those that were written: its SHA-256 differs.');
      continue;
    } else {
      fault(`Line ${number} is not a line of an exported audit trail.`);
    }
    digest.update(`${line}\n`);
  }
  if (!head)
    return { ok: false, entries: 0, scope: '', keyId: '', head: null, faults: ['The file is empty.'] };
  if (!ended) fault('The export ends before its last line: it was cut short.');
  checkHead(head);
  return { ok: faults.length === 0, entries, scope, keyId: head.keyId, head, faults };

  /** @param {Record<string, any>} value @param {number} at @param {Head} under */
  function checkEntry(value, at, under) {
    const content = typeof value.content === 'string' ? value.content : '';
    const entry = readContent(content);
    const name = entry ? `Entry ${entry.id}` : `The entry in line ${at}`;
    if (!entry) fault(`${name} has no readable content.`);
    else onEntry?.(entry);
    if (!isCount(value.leafIndex) || value.leafIndex <= lastIndex) fault(`${name} is out of order.`);
    else if (scope === 'whole' && value.leafIndex !== lastIndex + 1)
      fault(`${name} does not follow the one before: leaf ${lastIndex + 1} is missing.`);
    lastIndex = value.leafIndex;
    const leaf = leafOf(content);
    if (scope === 'selection') {
      if (
        !Array.isArray(value.proof) ||
        !isIncluded(leaf, value.leafIndex, under.size, value.proof, under.rootHash)
      )
        fault(`${name} was changed, or is not of this trail: its proof does not lead to the signed root.`);
      return;
    }
    tree.append(leaf);
    const kept = sizes.get(tree.size);
    if (kept && kept.rootHash !== tree.root())
      fault(`The first ${kept.size} entries are not those of the tree head kept elsewhere of ${kept.at}.`);
  }

  /** @param {Head} under */
  function checkHead(under) {
    if (scope === 'whole') {
      if (tree.size !== under.size)
        fault(`The signed tree head tells of ${under.size} entries; the export holds ${tree.size}.`);
      else if (tree.root() !== under.rootHash)
        fault('The entries do not hash to the signed root: at least one was changed.');
    }
    const publicKey = key ?? under.publicKey;
    if (!publicKey) fault(`The export does not hold the public key ${under.keyId}: give it with --key.`);
    else if (signatureFault(under, publicKey)) fault(`The tree head ${signatureFault(under, publicKey)}.`);
    for (const kept of heads) {
      if (kept.publicKey && signatureFault(kept, kept.publicKey))
        fault(`The tree head kept elsewhere of ${kept.at} ${signatureFault(kept, kept.publicKey)}.`);
      if (scope === 'whole' && kept.size > tree.size)
        fault(
          `A tree head kept elsewhere tells of ${kept.size} entries; the export holds ${tree.size}: its end is missing.`
        );
      if (scope === 'selection' && kept.size === under.size && kept.rootHash !== under.rootHash)
        fault(`The tree head of the export is not the one kept elsewhere of ${kept.at}.`);
    }
  }
}

/** @param {string} content @returns {Record<string, unknown> | null} */
function readContent(content) {
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
  const heads = [];
  for (const line of readFileSync(file, 'utf8').split('\n').filter(Boolean)) {
    const head = parsed(line);
    if (!isHead(head)) throw new Error(`${file} holds a line that is not a tree head`);
    heads.push(head);
  }
  return heads;
}

/** @param {string[]} words */
async function main(words) {
  const valueOf = (/** @type {string} */ flag) =>
    words.includes(flag) ? words[words.indexOf(flag) + 1] : undefined;
  const [file] = words.filter(
    (word, index) => !word.startsWith('--') && !['--heads', '--key'].includes(words[index - 1])
  );
  if (!file || words.includes('--help')) {
    console.error(
      'node verify-trail.mjs EXPORT.ndjson [--heads TREE-HEADS.ndjson] [--key PUBLIC-KEY] [--list]'
    );
    return 2;
  }
  const keyWord = valueOf('--key');
  const key = keyWord && existsSync(keyWord) ? readKeyFile(keyWord) : keyWord;
  const headsFile = valueOf('--heads');
  const heads = headsFile ? readHeadsFile(headsFile) : [];
  const lines = createInterface({ input: createReadStream(file), crlfDelay: Infinity });
  const onEntry = words.includes('--list')
    ? (/** @type {Record<string, unknown>} */ entry) => console.log(sentence(entry))
    : undefined;
  const result = await verifyExport(lines, { heads, key, onEntry });
  for (const found of result.faults) console.log(`NOT RIGHT: ${found}`);
  if (result.ok) {
    const what =
      result.scope === 'whole'
        ? `all ${result.entries} entries of the trail`
        : `${result.entries} chosen entries of a trail of ${result.head?.size}`;
    console.log(`RIGHT: ${what}, sealed at ${result.head?.at} under ${result.head?.rootHash}`);
    console.log(`Signed with key ${result.keyId}${key ? '' : ': compare it with the one you were given'}.`);
    if (heads.length === 0)
      console.log(
        'Compared with no tree head kept elsewhere: an end that was cut off before the export could not be seen (--heads).'
      );
  }
  return result.ok ? 0 : 1;
}

/** A key file: base64, or PEM. @param {string} file */
function readKeyFile(file) {
  const text = readFileSync(file, 'utf8').trim();
  return text.startsWith('-----')
    ? createPublicKey(text).export({ type: 'spki', format: 'der' }).toString('base64')
    : text;
}

if (process.argv[1] && realpathSync(process.argv[1]) === fileURLToPath(import.meta.url)) {
  try {
    process.exitCode = await main(process.argv.slice(2));
  } catch (error) {
    console.error(`It could not be checked: ${error instanceof Error ? error.message : error}`);
    process.exitCode = 2;
  }
}
