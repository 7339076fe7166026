import { SvelteKitAuth, type SvelteKitAuthConfig } from '@auth/sveltekit';
import Credentials from '@auth/sveltekit/providers/credentials';
import { isRedirect, type RequestEvent } from '@sveltejs/kit';
import { SESSION_ABSOLUTE_HOURS } from '../../domain/accounts';
import { database } from '../db/client';
import { authSecret } from './env';
import { guessesLeft, countGuess } from './guessLimit';
import { log } from './log';
import { touchSession, type LiveSession } from './sessions';
import { signInWithPassword, signOutToken } from './signIn';

/** `__Host-` binds the cookie to this host, the whole of it, and to secure transport. */
export const SESSION_COOKIE = '__Host-wharfinger';

/**
 * Auth.js keeps no database sessions with passwords, so its token format is replaced: the cookie is 256 random
 * bits that key our sessions table, `decode` reads that table at every request, `encode` hands the same bits
 * back. Ending the row ends the session everywhere at once, which a signed token could not do.
 */
const configure = (event: RequestEvent): SvelteKitAuthConfig => ({
  trustHost: true,
  secret: authSecret(),
  pages: { signIn: '/signin', error: '/signin' },
  session: { strategy: 'jwt', maxAge: SESSION_ABSOLUTE_HOURS * 3600 },
  cookies: {
    sessionToken: {
      name: SESSION_COOKIE,
      options: { httpOnly: true, sameSite: 'lax', path: '/', secure: true }
    }
  },
  providers: [
    Credentials({
      credentials: { userName: {}, password: {}, oneTimeCode: {} },
      authorize: async (given) => {
        const token = await signInWithPassword(database(), {
          userName: String(given.userName ?? '')
            .trim()
            .slice(0, 200),
          password: String(given.password ?? '').slice(0, 1000),
          oneTimeCode: String(given.oneTimeCode ?? '').slice(0, 20),
          address: event.getClientAddress(),
          userAgent: event.request.headers.get('user-agent') ?? undefined,
          requestId: event.locals.requestId
        });
        return token === null ? null : { id: 'session', opaqueToken: token };
      }
    })
  ],
  jwt: {
    encode: ({ token }) => String(token?.opaqueToken ?? ''),
    decode: async ({ token }) => {
      const live = token ? await touchSession(database(), token) : null;
      return live ? { opaqueToken: token, live } : null;
    }
  },
  callbacks: {
    jwt: ({ token, user }) =>
      user && 'opaqueToken' in user ? { ...token, opaqueToken: user.opaqueToken } : token,
    session: ({ session, token }) => ({ ...session, live: token.live })
  },
  events: {
    signOut: async (message) => {
      const token = 'token' in message ? message.token?.opaqueToken : undefined;
      if (typeof token === 'string') await signOutToken(database(), token, event.locals.requestId);
    }
  },
  logger: {
    // A cookie of an ended session is daily life, not an error.
    error: (error) => log.debug({ name: error.name }, 'sign-in library'),
    warn: () => {},
    debug: () => {}
  }
});
// Promised, because the library asks for it so when the request is to be seen.
const { handle, signIn, signOut } = SvelteKitAuth((event) => Promise.resolve(configure(event)));

export const authHandle = handle;

/** The live session behind the request's cookie, or null. */
export async function readSession(event: RequestEvent): Promise<LiveSession | null> {
  if (!event.cookies.get(SESSION_COOKIE)) return null;
  const session = (await event.locals.auth()) as { live?: LiveSession } | null;
  return session?.live ?? null;
}

/** `too-many`: this address has guessed wrong too often and waits. */
export type SignInResult = 'signed-in' | 'wrong' | 'too-many';

/** Signs in with the form's user name, password and one-time code, and sets the cookie. */
export async function signInWithForm(event: RequestEvent, form: FormData): Promise<SignInResult> {
  const address = event.getClientAddress();
  if (!(await guessesLeft(address))) return 'too-many';
  const asked = new FormData();
  for (const name of ['userName', 'password', 'oneTimeCode']) asked.set(name, String(form.get(name) ?? ''));
  asked.set('providerId', 'credentials');
  try {
    await signIn(withForm(event, asked));
  } catch (thrown) {
    const wrong = thrown instanceof Error && 'type' in thrown && thrown.type === 'CredentialsSignin';
    if (wrong) await countGuess(address);
    if (wrong) return 'wrong';
    if (!isRedirect(thrown)) throw thrown;
  }
  forgetWhereTo(event);
  return 'signed-in';
}

/** The library remembers where to go in a cookie of its own; we do not need it. */
function forgetWhereTo(event: RequestEvent): void {
  event.cookies.delete('authjs.callback-url', { path: '/' });
  event.cookies.delete('__Secure-authjs.callback-url', { path: '/', secure: true });
}

/** Ends the session of the request's cookie and takes the cookie away. */
export async function signOutRequest(event: RequestEvent): Promise<void> {
  if (!event.cookies.get(SESSION_COOKIE)) return;
  try {
    await signOut(withForm(event, new FormData()));
  } catch (thrown) {
    if (!isRedirect(thrown)) throw thrown;
  }
  event.cookies.delete(SESSION_COOKIE, { path: '/', secure: true });
  forgetWhereTo(event);
}

// The library reads the form out of the request; ours has been read already.
function withForm(event: RequestEvent, form: FormData): RequestEvent {
  const { headers } = event.request;
  const kept = new Headers(
    ['host', 'origin', 'cookie', 'user-agent'].flatMap((name) =>
      headers.has(name) ? [[name, headers.get(name) ?? '']] : []
    ) as [string, string][]
  );
  return { ...event, request: new Request(event.url, { method: 'POST', headers: kept, body: form }) };
}
