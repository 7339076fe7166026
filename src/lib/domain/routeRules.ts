import type { Action } from './roles';

/** An action that a role must allow; or open to everybody; or to anybody who is signed in. */
export type RouteRule = Action | 'public' | 'signed-in';

/**
 * Who may open what: the one table that the gate reads. A key is the method and the route without its groups
 * and matchers, and for a form the name of its action: `POST /lots/[id]?release`. HEAD counts as GET. What is
 * not listed is refused to everybody, so a forgotten line shows at once and opens nothing. Reading a page never
 * changes a record; what an action may do to which record is decided again by its command.
 */
export const ROUTE_RULES: Readonly<Record<string, RouteRule>> = {
  'GET /signin': 'public',
  'POST /signin': 'public',
  'GET /signout': 'signed-in',
  'POST /signout': 'public',
  'GET /refused': 'signed-in',
  'GET /verify/[code]': 'public',
  'GET /password/[token]': 'public',
  'POST /password/[token]': 'public',

  'GET /': 'tally.read',
  'GET /deliveries': 'delivery.read',
  'GET /deliveries/new': 'delivery.register',
  'POST /deliveries/new?register': 'delivery.register',
  'GET /deliveries/[id]': 'delivery.read',
  'GET /bay': 'scan.record',
  'GET /bay/[lot]': 'scan.record',
  'POST /bay/[lot]?askRepeat': 'repeat.request',
  'POST /bay/[lot]?setAside': 'container.set-aside',
  'GET /lots': 'lot.read',
  'GET /lots/[id]': 'lot.read',
  'POST /lots/[id]?release': 'lot.release',
  'POST /lots/[id]?reject': 'lot.release',
  'POST /lots/[id]?paper': 'paper.attach',
  'POST /lots/[id]?limitTest': 'limit-test.record',
  'POST /lots/[id]?setAside': 'container.set-aside',
  'POST /lots/[id]?repeat': 'repeat.grant',
  'GET /lots/[id]/papers/[paper]': 'lot.read',
  'GET /scans/[id]': 'scan.read',
  'POST /scans/[id]?replay': 'scan.replay',
  'GET /scans/[id]/file': 'scan.read',
  'GET /review': 'review.read',
  'GET /deviations': 'deviation.read',
  'GET /deviations/[id]': 'deviation.read',
  'POST /deviations/[id]?note': 'deviation.work',
  'POST /deviations/[id]?conclude': 'deviation.close',
  'GET /certificates': 'certificate.read',
  'GET /certificates/[id]/pdf': 'certificate.read',
  'GET /materials': 'material.read',
  'GET /materials/[id]': 'material.read',
  'GET /methods': 'method.read',
  'GET /methods/[version]': 'method.read',
  'POST /methods/[version]?submit': 'method.submit',
  'POST /methods/[version]?approve': 'method.approve',
  'GET /instruments': 'instrument.read',
  'GET /instruments/[id]': 'instrument.read',
  'POST /instruments/[id]?check': 'instrument.check',
  'POST /instruments/[id]?takeOut': 'instrument.take-out',
  'GET /trail': 'trail.read',
  'POST /trail?verify': 'trail.verify',
  'GET /admin': 'admin.people',
  'GET /admin/new': 'admin.people',
  'POST /admin/new?create': 'admin.people',
  'GET /admin/[id]': 'admin.people',
  'POST /admin/[id]?status': 'admin.people',
  'POST /admin/[id]?endSessions': 'admin.people',
  'POST /admin/[id]?link': 'admin.people',
  'POST /admin/[id]?requestRole': 'admin.people',
  'POST /admin/[id]?endRole': 'admin.people',
  'GET /admin/mail': 'admin.mail',
  'GET /roles': 'role.grant',
  'POST /roles?grant': 'role.grant',
  'POST /roles?decline': 'role.grant',
  'GET /account': 'account.own',
  'POST /account?password': 'account.own',
  'POST /account?endSession': 'account.own',
  'GET /help': 'help.read',

  'POST /api/v1/scans': 'scan.record',
  'GET /api/v1/scans/[id]': 'scan.read'
};

/** A route's id as the table writes it: `/(app)/lots/[id=uuid]` becomes `/lots/[id]`. */
export function routePath(routeId: string): string {
  const path = routeId.replaceAll(/\/\([^)]*\)/g, '').replaceAll(/\[([^\]=]+)=[^\]]+\]/g, '[$1]');
  return path === '' ? '/' : path;
}

/** The table's key of a request. `formAction` is the name after the `?/` of a form's address. */
export function routeKey(method: string, routeId: string, formAction?: string): string {
  const verb = method === 'HEAD' ? 'GET' : method;
  return `${verb} ${routePath(routeId)}${formAction ? `?${formAction}` : ''}`;
}

/** The rule of a request, or null where the table has none and it is refused. */
export function routeRule(method: string, routeId: string, formAction?: string): RouteRule | null {
  const key = routeKey(method, routeId, formAction);
  return Object.hasOwn(ROUTE_RULES, key) ? ROUTE_RULES[key] : null;
}
