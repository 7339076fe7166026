import { PASSWORD_MAX_LENGTH, PASSWORD_MIN_LENGTH } from './accounts';

/** Beginnings of passwords that guessers try first; our own short list, lower case, letters and digits only. */
const COMMON = [
  'password',
  'passphrase',
  'letmein',
  'qwertyuiop',
  'qwerty',
  'asdfghjkl',
  'welcome',
  'administrator',
  'changeme',
  'iloveyou',
  'sunshine',
  'football',
  'princess',
  'trustno1',
  'abcdefghij',
  '1234567890',
  '0123456789',
  '9876543210'
];

/** Words every site has in common. */
const CONTEXT = ['wharfinger', 'raman', 'spectrum', 'quarantine', 'warehouse', 'release'];

const plain = (text: string) => text.toLowerCase().replaceAll(/[^\p{L}\p{N}]/gu, '');

/**
 * Why a password is not accepted, or null. Long, not guessable, and nothing else: no rule of character classes,
 * no calendar (NIST SP 800-63B-4). `context` holds words a guesser knows: the user's name, the site, the plant.
 */
export function passwordFault(password: string, context: readonly string[] = []): string | null {
  const length = [...password].length;
  if (length < PASSWORD_MIN_LENGTH)
    return `Use at least ${PASSWORD_MIN_LENGTH} characters; a short sentence is good`;
  if (length > PASSWORD_MAX_LENGTH) return `Use at most ${PASSWORD_MAX_LENGTH} characters`;
  if (new Set(plain(password)).size < 5) return 'Use more different characters: this one repeats a few';
  // What is left without the known words must still be hard to guess.
  const known = [
    ...COMMON,
    ...CONTEXT,
    ...context.flatMap((text) => text.split(/[^\p{L}\p{N}]+/u)).map(plain)
  ];
  const rest = known
    .filter((word) => word.length >= 4)
    .sort((a, b) => b.length - a.length)
    .reduce((left, word) => left.replaceAll(word, ''), plain(password));
  if (rest.length < 8) return 'Too easy to guess: it is made of common words, or of your name or the site';
  return null;
}
