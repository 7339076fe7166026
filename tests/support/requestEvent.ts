import type { Cookies, RequestEvent } from '@sveltejs/kit';

export interface AskedRequest {
  readonly method?: string;
  readonly path: string;
  /** Route's id as SvelteKit has it, null where no route matches. */
  readonly routeId: string | null;
  readonly headers?: Record<string, string>;
  readonly cookies?: Record<string, string>;
  readonly locals?: Partial<App.Locals>;
  readonly body?: FormData;
  readonly isDataRequest?: boolean;
}

export type AskedEvent = RequestEvent & {
  readonly jar: Map<string, { value: string; options: Record<string, unknown> }>;
};

/** A request as hooks see it, with a jar that remembers what cookies were set. */
export function requestEvent(asked: AskedRequest): AskedEvent {
  const url = new URL(asked.path, 'http://127.0.0.1:4180');
  const jar = new Map<string, { value: string; options: Record<string, unknown> }>();
  const sent = { ...asked.cookies };
  const cookies = {
    get: (name: string) => jar.get(name)?.value ?? sent[name],
    getAll: () => Object.entries(sent).map(([name, value]) => ({ name, value })),
    set: (name: string, value: string, options: Record<string, unknown>) =>
      void jar.set(name, { value, options }),
    delete: (name: string, options: Record<string, unknown>) => void jar.set(name, { value: '', options }),
    serialize: () => ''
  } as unknown as Cookies;
  const cookie = Object.entries(sent).map(([name, value]) => `${name}=${value}`);
  const headers = new Headers({
    host: url.host,
    ...(cookie.length > 0 ? { cookie: cookie.join('; ') } : {}),
    ...asked.headers
  });
  const event = {
    url,
    cookies,
    jar,
    request: new Request(url, { method: asked.method ?? 'GET', headers, body: asked.body }),
    route: { id: asked.routeId },
    params: {},
    locals: { act: null, scopes: null, requestId: 'a request', ...asked.locals },
    platform: undefined,
    isDataRequest: asked.isDataRequest ?? false,
    isSubRequest: false,
    getClientAddress: () => '192.0.2.1',
    setHeaders: () => {},
    fetch: (input: string) => Promise.resolve(new Response(`fetched ${input}`, { status: 403 }))
  };
  return event as unknown as AskedEvent;
}
