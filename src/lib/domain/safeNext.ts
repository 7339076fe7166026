/**
 * Where to go after signing in: a path of this site, or the front page for anything else. What a link carries in
 * `next` may come from a stranger, so it must not lead off the site (`//host`, `/\host`) or back to the door.
 */
export function safeNext(next: string | null | undefined): string {
  if (!next || !/^\/(?![/\\])[^\\\p{Cc}]*$/u.test(next) || next.length > 2000) return '/';
  return /^\/(signin|signout|auth|refused)(?=[/?#]|$)/.test(next) ? '/' : next;
}
