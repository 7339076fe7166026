import { z } from 'zod';
import { calendarDate } from './calendarDate';

/** Names of functions and rooms, under which nobody in particular would act. */
const GENERIC = new Set(
  (
    'admin administrator anonymous approver auditor demo dock everybody everyone guest instrument it lab laboratory ' +
    'login manager method name nobody office operator owner person plant public qa qc quality raman role root scanner ' +
    'service setup shared shift somebody staff superuser supervisor support sysadmin system team temp temporary test ' +
    'tester training user visitor warehouse wharfinger'
  ).split(' ')
);

/** Whether every word of a name is a function, a room, a number or a single letter: it names no one person. */
export function isGenericName(name: string): boolean {
  const words = name
    .toLowerCase()
    .split(/[^\p{L}]+/u)
    .filter((word) => word.length > 1);
  return words.every((word) => GENERIC.has(word));
}

const text = (most: number, empty: string) =>
  z.string().trim().min(1, empty).max(most, `Use at most ${most} characters`);

/** A new account as the form sends it. Every value is text; the day of the proof is `YYYY-MM-DD`. */
export const newAccountSchema = z.object({
  userName: text(40, 'Enter the user name')
    .regex(
      /^[\p{L}][\p{L}\p{N}._-]{2,}$/u,
      'Use at least 3 letters, digits, points or hyphens, a letter first'
    )
    .refine((name) => !isGenericName(name), 'This names a function, not one person'),
  personId: text(40, 'Enter the personnel number'),
  printedName: text(100, 'Enter the name as it is printed with signatures').refine(
    (name) => !isGenericName(name),
    'This names a function, not one person'
  ),
  email: text(200, 'Enter the e-mail address').regex(
    /^[^\s@]+@[^\s@]+$/,
    'Enter an address like name@place.example'
  ),
  proofedBy: text(200, 'Enter who saw the proof of identity'),
  proofedOn: calendarDate
});
export type NewAccount = z.infer<typeof newAccountSchema>;
