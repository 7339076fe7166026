/** Settings read from the environment, each in one place. Empty counts as absent. */
const read = (name: string): string | undefined => process.env[name] || undefined;

/** PEM file of the Ed25519 key that signs tree heads; kept apart from the database. */
export const trailKeyFile = () => read('TRAIL_KEY_FILE');
/** Secret of the sign-in library. */
export const authSecret = () => read('AUTH_SECRET');
/** File outside the database to which every tree head is appended. */
export const trailHeadsFile = () => read('TRAIL_HEADS_FILE');
export const smtpUrl = () => read('SMTP_URL');
/** Where the local mail catcher keeps mails; only in demo and tests. */
export const mailFolder = () => read('MAIL_FOLDER');
export const mailFrom = () => read('MAIL_FROM') ?? 'Wharfinger <wharfinger@localhost>';
/** Where people reach the application; links in mails begin with it. */
export const origin = () => read('ORIGIN') ?? 'http://127.0.0.1:4180';
export const demoMode = () => read('DEMO') === '1';
export const demoAccountsFile = () => read('DEMO_ACCOUNTS_FILE');
export const logLevel = () => read('LOG_LEVEL') ?? (read('NODE_ENV') === 'production' ? 'info' : 'warn');

/** DATABASE_URL, which the background services open connections of their own with. */
export function databaseUrl(): string {
  const url = read('DATABASE_URL');
  if (!url) throw new Error('DATABASE_URL is not set: the application has no database to speak to');
  return url;
}
