/**
 * JSON Canonicalization Scheme, RFC 8785: no white space, members sorted by the UTF-16 code units of their
 * names, numbers and strings as ECMAScript writes them. One value has one text, so that its hash can be signed.
 * Members that are undefined are left out, as in JSON; NaN, infinities, lone surrogates, functions and
 * undefined array items are refused, because another reader would not see the same value.
 *
 * Worked example: { b: 1e21, a: [true, null, 'é'] } gives {"a":[true,null,"é"],"b":1e+21}.
 */
export function canonicalJson(value: unknown): string {
  if (value === null || typeof value === 'boolean') return String(value);
  if (typeof value === 'number') {
    if (!Number.isFinite(value)) throw new TypeError(`${value} has no JSON form`);
    return JSON.stringify(value);
  }
  if (typeof value === 'string') return canonicalString(value);
  if (Array.isArray(value)) return `[${value.map(canonicalJson).join(',')}]`;
  if (typeof value === 'object') return canonicalObject(value);
  throw new TypeError(`a ${typeof value} has no JSON form`);
}

function canonicalObject(value: object): string {
  if ('toJSON' in value && typeof value.toJSON === 'function') return canonicalJson(value.toJSON());
  const prototype: unknown = Object.getPrototypeOf(value);
  if (prototype !== Object.prototype && prototype !== null)
    throw new TypeError('only plain objects and arrays have a canonical form');
  const members = Object.entries(value)
    .filter(([, member]) => member !== undefined)
    // The default order of sort() is by UTF-16 code units, which is the RFC's.
    .sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0))
    .map(([name, member]) => `${canonicalString(name)}:${canonicalJson(member)}`);
  return `{${members.join(',')}}`;
}

function canonicalString(text: string): string {
  if (/[\uD800-\uDBFF](?![\uDC00-\uDFFF])|(?<![\uD800-\uDBFF])[\uDC00-\uDFFF]/.test(text)) {
    throw new TypeError('a lone surrogate has no UTF-8 form');
  }
  return JSON.stringify(text);
}
