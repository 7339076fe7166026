import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { z } from 'zod';
import { newDeliverySchema } from '$lib/domain/deliveries';
import { fieldSentences, nested, readForm } from '$lib/server/platform/form';

const formOf = (entries: [string, string | File][]) => {
  const form = new FormData();
  for (const [name, value] of entries) form.append(name, value);
  return form;
};

describe('forms as trees', () => {
  it('dots make lists and members, a name given twice makes a list, files are left out', () => {
    const tree = nested(
      formOf([
        ['note', 'N 1'],
        ['lots.0.batch', 'A'],
        ['lots.1.batch', 'B'],
        ['container', '1'],
        ['container', '2'],
        ['file', new File(['x'], 'x.pdf')]
      ])
    );
    expect(JSON.parse(JSON.stringify(tree))).toEqual({
      note: 'N 1',
      lots: [{ batch: 'A' }, { batch: 'B' }],
      container: ['1', '2']
    });
  });

  it('names cannot reach a prototype, nor make a list of a billion', () => {
    nested(
      formOf([
        ['__proto__.polluted', 'yes'],
        ['a.__proto__.polluted', 'yes'],
        ['constructor.prototype.polluted', 'yes']
      ])
    );
    expect(({} as { polluted?: string }).polluted).toBeUndefined();
    const long = nested(
      formOf([
        ['lots.999999999.x', 'y'],
        ['lots.4294967294', 'z'],
        ['deep.a.b.c.d.e.f.g', 'y']
      ])
    );
    expect(JSON.stringify(long).length).toBeLessThan(40);
  });

  it('whatever names come, nothing throws and no prototype changes', () => {
    const part = fc.constantFrom('a', '0', '1', '__proto__', 'constructor', 'length', 'push', '');
    const name = fc.array(part, { minLength: 1, maxLength: 4 }).map((parts) => parts.join('.'));
    fc.assert(
      fc.property(fc.array(fc.tuple(name, fc.string({ maxLength: 5 })), { maxLength: 8 }), (entries) => {
        nested(formOf(entries));
        expect(Object.keys(Object.prototype)).toEqual([]);
        expect(typeof [].push).toBe('function');
      }),
      { numRuns: 400 }
    );
  });
});

describe('what is said at each field', () => {
  it("is the schema's own sentence, at the field's name as the form has it, and plain where the schema says nothing", () => {
    const read = readForm(
      newDeliverySchema,
      formOf([
        ['deliveryNote', ''],
        ['lots.0.containerCount', 'many'],
        ['role', 'administrator']
      ])
    );
    expect(read.ok).toBe(false);
    const fields = read.ok ? {} : read.fields;
    expect(fields['deliveryNote']).toBe('Enter the delivery note number');
    expect(fields['lots.0.containerCount']).toBe('Enter the number of containers as a whole number');
    expect(fields['role']).toBe('This field is not part of the form');
    expect(fields['supplierId']).toBeTruthy();
    expect(JSON.stringify(fields)).not.toMatch(/Invalid|expected|received|undefined/);
  });

  it('comes with what was typed, but never with a password or code', () => {
    const schema = z.object({
      reason: z.string().min(3, 'Say why'),
      password: z.string(),
      oneTimeCode: z.string()
    });
    const read = readForm(
      schema,
      formOf([
        ['reason', 'x'],
        ['password', 'secret words'],
        ['oneTimeCode', '123456']
      ])
    );
    expect(JSON.stringify(read)).not.toMatch(/secret words|123456/);
    expect(read).toMatchObject({ ok: false, fields: { reason: 'Say why' }, values: { reason: 'x' } });
  });

  it('gives the value when all is well', () => {
    expect(readForm(z.object({ n: z.coerce.number() }), formOf([['n', '7']]))).toEqual({
      ok: true,
      value: { n: 7 }
    });
  });

  it('the first complaint about a field is the one said', () => {
    const schema = z.object({ a: z.string().min(2, 'first').regex(/^\d+$/, 'second') });
    const parsed = schema.safeParse({ a: 'x' });
    expect(parsed.success ? {} : fieldSentences(parsed.error)).toEqual({ a: 'first' });
  });
});
