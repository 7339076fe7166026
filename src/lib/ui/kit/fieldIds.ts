/** Id of the input that belongs to a form field, so that an error summary can link to it. */
export const fieldId = (name: string): string => `field-${name.replaceAll(/[^A-Za-z0-9]+/g, '-')}`;

/** What describes a field to a screen reader: its hint, then its error. */
export function describedBy(
  id: string,
  hint: string | undefined,
  error: string | undefined
): string | undefined {
  const ids = [hint ? `${id}-hint` : '', error ? `${id}-error` : ''].filter((part) => part !== '');
  return ids.length > 0 ? ids.join(' ') : undefined;
}
