/** Writes ordinate tables in every ASDF form, to be read back. Whole numbers only, as the packed forms hold. */
export type AsdfForm = 'FIX' | 'PAC' | 'SQZ' | 'DIF' | 'DIFDUP';

const PER_LINE = 9;
const SQZ_POSITIVE = '@ABCDEFGHI';
const SQZ_NEGATIVE = '@abcdefghi';
const DIF_POSITIVE = '%JKLMNOPQR';
const DIF_NEGATIVE = '%jklmnopqr';
const DUP = ' STUVWXYZs';

/** First digit of a number replaced by the letter of its form. */
function packed(value: number, positive: string, negative: string): string {
  const digits = String(Math.abs(value));
  return (value < 0 ? negative : positive)[Number(digits[0])] + digits.slice(1);
}

const repeatCount = (count: number): string => {
  const digits = String(count);
  return DUP[Number(digits[0])] + digits.slice(1);
};

/** Entries of a line with runs of the same entry replaced by a repeat count. */
function withRepeats(entries: readonly string[]): string {
  let text = '';
  for (let i = 0; i < entries.length;) {
    let run = 1;
    while (i > 0 && i + run < entries.length && entries[i + run] === entries[i]) run++;
    text += entries[i] + (run > 1 ? repeatCount(run) : '');
    i += run;
  }
  return text;
}

function lineOf(values: readonly number[], form: AsdfForm): string {
  if (form === 'FIX') return values.map((value) => ` ${value}`).join('');
  if (form === 'PAC') return values.map((value) => (value < 0 ? String(value) : `+${value}`)).join('');
  if (form === 'SQZ') return values.map((value) => packed(value, SQZ_POSITIVE, SQZ_NEGATIVE)).join('');
  const entries = values.map((value, i) =>
    i === 0
      ? packed(value, SQZ_POSITIVE, SQZ_NEGATIVE)
      : packed(value - values[i - 1], DIF_POSITIVE, DIF_NEGATIVE)
  );
  return form === 'DIF' ? entries.join('') : withRepeats(entries);
}

/** A whole JCAMP-DX file of whole ordinates on an even axis. In the DIF forms each next line begins with the check value. */
export function jcampFile(
  y: readonly number[],
  form: AsdfForm,
  options: { firstX?: number; step?: number; eol?: string; end?: boolean; factor?: number } = {}
): string {
  const { firstX = 400, step = 2, eol = '\n', end = true, factor = 1 } = options;
  const checked = form === 'DIF' || form === 'DIFDUP';
  const lines: string[] = [];
  for (let at = 0; at < y.length; at += PER_LINE) {
    const from = checked && at > 0 ? at - 1 : at;
    lines.push(`${firstX + from * step}${lineOf(y.slice(from, at + PER_LINE), form)}`);
  }
  if (checked && y.length > 0)
    lines.push(`${firstX + (y.length - 1) * step}${lineOf([y[y.length - 1]], form)}`);
  return [
    '##TITLE= made for a test',
    '##JCAMP-DX= 4.24 $$ a comment',
    '##DATA TYPE= RAMAN SPECTRUM',
    '##XUNITS= 1/CM',
    '##YUNITS= ARBITRARY UNITS',
    '##XFACTOR= 1',
    `##YFACTOR= ${factor}`,
    `##FIRSTX= ${firstX}`,
    `##LASTX= ${firstX + (y.length - 1) * step}`,
    `##DELTAX= ${step}`,
    `##NPOINTS= ${y.length}`,
    '##XYDATA= (X++(Y..Y))',
    ...lines,
    ...(end ? ['##END='] : []),
    ''
  ].join(eol);
}
