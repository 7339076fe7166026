import { and, eq, isNull, sql } from 'drizzle-orm';
import { PASSWORD_LINK_MINUTES } from '../../domain/accounts';
import type { Executor, Transaction } from '../db/client';
import { passwordLinks, sites, users } from '../db/schema';
import { newToken, tokenKey } from './sessions';

/**
 * Makes the one link of an account that is good from now on and returns its token, which is kept nowhere. Older
 * links of the account are withdrawn. `createdBy` is null where the installation makes it.
 */
export async function issuePasswordLink(
  tx: Transaction,
  userId: string,
  createdBy: string | null
): Promise<string> {
  await tx
    .update(passwordLinks)
    .set({ withdrawnAt: sql`clock_timestamp()` })
    .where(
      and(eq(passwordLinks.userId, userId), isNull(passwordLinks.usedAt), isNull(passwordLinks.withdrawnAt))
    );
  const token = newToken();
  await tx.insert(passwordLinks).values({
    tokenHash: tokenKey(token),
    userId,
    createdBy,
    expiresAt: sql`clock_timestamp() + make_interval(mins => ${PASSWORD_LINK_MINUTES})`
  });
  return token;
}

/** Path of the page where the link's owner sets the password. */
export const passwordPath = (token: string) => `/password/${token}`;

/** The link of a token with its account, and why it is no longer good (null while it is); null where there is none. */
export async function readPasswordLink(db: Executor, token: string) {
  const [row] = await db
    .select({
      id: passwordLinks.id,
      usedAt: passwordLinks.usedAt,
      withdrawnAt: passwordLinks.withdrawnAt,
      lapsed: sql<boolean>`${passwordLinks.expiresAt} <= clock_timestamp()`,
      user: users,
      site: sites
    })
    .from(passwordLinks)
    .innerJoin(users, eq(users.id, passwordLinks.userId))
    .innerJoin(sites, eq(sites.id, users.siteId))
    .where(eq(passwordLinks.tokenHash, tokenKey(token)));
  return row ? { ...row, spent: whySpent(row) } : null;
}

function whySpent(link: { usedAt: Date | null; withdrawnAt: Date | null; lapsed: boolean }): string | null {
  if (link.usedAt) return 'This link has been used. It sets a password once.';
  if (link.withdrawnAt) return 'A newer link was made for this account, so this one no longer counts.';
  if (link.lapsed) return `This link was good for ${PASSWORD_LINK_MINUTES} minutes, and they are over.`;
  return null;
}
