import type { ZodError, ZodType } from 'zod';

type Tree = { [name: string]: string | Tree | Tree[] | string[] };

export type ReadForm<T> =
  | { readonly ok: true; readonly value: T }
  | { readonly ok: false; readonly fields: Record<string, string>; readonly values: Tree };

/** Most items of one list in a form; more is not a form but an attack on memory. */
const MAX_ITEMS = 5000;
const MAX_DEPTH = 6;

/**
 * A form's text fields as a tree, by their names: `lots.0.expiresOn` is the expiry date of the first lot, a name
 * given several times is a list. Files are left out. Names that no schema has are kept, so that a strict schema
 * refuses them by name.
 */
export function nested(form: FormData): Tree {
  const root = emptyTree();
  for (const name of new Set(form.keys())) {
    const texts = form.getAll(name).filter((value) => typeof value === 'string');
    const path = name.split('.');
    if (texts.length === 0 || path.length > MAX_DEPTH || path.some((step) => step === '__proto__')) continue;
    place(root, path, texts.length === 1 ? texts[0] : texts);
  }
  return root;
}

function place(root: Tree, path: readonly string[], value: string | string[]): void {
  let at: Tree = root;
  for (const [depth, step] of path.entries()) {
    const isIndex = /^\d+$/.test(step);
    if (isIndex ? Number(step) >= MAX_ITEMS : Array.isArray(at)) return;
    if (depth === path.length - 1) {
      at[step] = value;
      return;
    }
    const known = Object.hasOwn(at, step) ? at[step] : undefined;
    if (typeof known === 'string') return;
    if (known === undefined) at[step] = /^\d+$/.test(path[depth + 1]) ? [] : emptyTree();
    at = at[step] as Tree;
  }
}

// Without a prototype, so that no name of a field is one of its members.
const emptyTree = () => Object.create(null) as Tree;

/** A schema's complaints as field name (`lots.0.expiresOn`) to sentence; the first of each field. */
export function fieldSentences(error: ZodError): Record<string, string> {
  const fields: Record<string, string> = {};
  for (const issue of error.issues) {
    if (issue.code === 'unrecognized_keys') {
      for (const key of issue.keys)
        fields[[...issue.path, key].join('.')] ??= 'This field is not part of the form';
      continue;
    }
    fields[issue.path.join('.') || 'form'] ??= plainSentence(issue.message);
  }
  return fields;
}

/** Sentences the schema's author did not write read like "Invalid input: expected string"; people get plain words. */
const plainSentence = (message: string) =>
  /^(Invalid|Too |Unrecognized|Expected)/.test(message) ? 'Fill this in' : message;

/** Reads a whole form by a schema: the value, or what to say at each field with what had been typed. */
export function readForm<T>(schema: ZodType<T>, form: FormData): ReadForm<T> {
  const values = nested(form);
  const parsed = schema.safeParse(values);
  return parsed.success
    ? { ok: true, value: parsed.data }
    : { ok: false, fields: fieldSentences(parsed.error), values: withoutSecrets(values) };
}

/** Passwords and codes never travel back to the page. */
function withoutSecrets(values: Tree): Tree {
  const { password: _password, oneTimeCode: _oneTimeCode, ...rest } = values;
  return rest;
}
