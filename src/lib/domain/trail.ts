/**
 * The audit trail's words and signed texts.
 *
 * An entry's content is the text that the database made of all its columns when it was written (a JSON object
 * with PostgreSQL's jsonb ordering). Leaf n of the trail's tree is SHA-256(0x00 || UTF-8 of that text), after
 * RFC 6962 (merkleTree.ts). A tree head says how many entries are sealed and what the tree over them hashes to;
 * what is signed with Ed25519 is exactly this text, each line ended by a line feed:
 *
 *     wharfinger tree head v1
 *     3
 *     0f0f…64 hex digits…
 *     2026-12-01T09:30:00.125Z
 *     5c1d2e3f4a5b6c7d
 *
 * that is: the words, the size, the root, the time of sealing (UTC), the id of the signing key.
 */
export const TREE_HEAD_TITLE = 'wharfinger tree head v1';

/** The text of a tree head that is signed. */
export function treeHeadText(size: number, rootHash: string, at: string, keyId: string): string {
  return `${TREE_HEAD_TITLE}\n${size}\n${rootHash}\n${at}\n${keyId}\n`;
}

/** A tree head in the short form that certificates print: `1042 / 5c1d 2e3f 4a5b 6c7d`. */
export function shortTreeHead(size: number, rootHash: string): string {
  const groups = rootHash.slice(0, 16).match(/.{1,4}/g) ?? [];
  return `${size} / ${groups.join(' ')}`;
}

/** What can be on the trail, and the sentence it reads as after the person's name. */
export const TRAIL_ACTIONS = {
  'session.sign-in': 'signed in',
  'session.sign-in-failed': 'was not signed in',
  'session.sign-out': 'signed out',
  'session.end': 'ended sessions',
  'session.revoked': 'lost the session after wrong passwords at a signature',
  'account.create': 'created the account',
  'account.status': 'changed the state of the account',
  'account.locked': 'was locked out after wrong passwords',
  'account.password': 'set the password',
  'account.password-refused': 'was refused a new password',
  'account.password-link': 'made a link to set the password',
  'account.statement': 'accepted accountability for signatures',
  'account.proof': 'recorded the proof of identity',
  'role.request': 'asked for a role',
  'role.grant': 'granted a role',
  'role.decline': 'declined a role',
  'role.end': 'ended a role',
  'token.create': 'made an access token',
  'token.revoke': 'revoked an access token',
  'access.refused': 'was refused',
  'signature.make': 'signed',
  'signature.refused': 'was refused a signature',
  'site.settings': 'changed settings of the site',
  'caution.acknowledge': 'acknowledged a caution',
  'delivery.register': 'registered the delivery',
  'lot.register': 'registered the lot',
  'lot.release': 'released the lot',
  'lot.reject': 'rejected the lot',
  'lot.reopen': 'reopened the lot',
  'lot.hold': 'held the lot',
  'label.print': 'printed labels',
  'paper.attach': 'attached a paper',
  'limit-test.record': 'recorded a limit test',
  'container.set-aside': 'set the container aside',
  'scan.record': 'scanned the container',
  'scan.file-refused': 'sent a file that could not be read',
  'scan.wrong-lot': 'scanned a container of another lot',
  'scan.replay': 'computed the decision again',
  'scan.replay-differs': 'found a decision that does not compute to the same again',
  'repeat.request': 'asked for a repeat',
  'repeat.grant': 'granted the repeat',
  'repeat.decline': 'declined the repeat',
  'deviation.open': 'opened the deviation',
  'deviation.note': 'added a note to the deviation',
  'deviation.close': 'closed the deviation',
  'certificate.issue': 'issued the certificate',
  'certificate.read': 'read the certificate',
  'material.create': 'created the material',
  'material.change': 'changed the material',
  'source.approve': 'approved the source',
  'source.withdraw': 'withdrew the source',
  'reference.add': 'added the reference',
  'reference.accept': 'accepted the reference',
  'reference.reject': 'rejected the reference',
  'method.draft': 'wrote the draft',
  'method.change': 'changed the draft',
  'method.submit': 'submitted the method version',
  'method.return': 'returned the method version to its author',
  'method.approve': 'approved the method version',
  'method.supersede': 'superseded the method version',
  'method.withdraw': 'withdrew the method version',
  'method.validate': 'ran a validation',
  'method.impact': 'ran an impact assessment',
  'challenge.create': 'made a challenge set',
  'challenge.use': 'used a challenge set',
  'instrument.create': 'registered the instrument',
  'instrument.change': 'changed the instrument',
  'instrument.check': 'checked the instrument',
  'instrument.take-out': 'took the instrument out of service',
  'instrument.return': 'returned the instrument to service',
  'tolerance.approve': 'approved tolerances',
  'trail.verify': 'verified the trail',
  'trail.review': 'reviewed the trail',
  'trail.export': 'exported the trail',
  'record.export': 'exported records',
  'mail.retry': 'sent a mail again',
  'system.start': 'started',
  'system.alarm': 'raised an alarm',
  'demo.seed': 'filled in the demo plant'
} as const satisfies Record<string, string>;

export type TrailAction = keyof typeof TRAIL_ACTIONS;

/** What an entry reads as after the person's name; an action of an older build reads as its code. */
export function trailSentence(action: string): string {
  return Object.hasOwn(TRAIL_ACTIONS, action) ? TRAIL_ACTIONS[action as TrailAction] : `did "${action}"`;
}
