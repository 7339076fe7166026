import type { Act } from '$lib/server/platform/act';

declare global {
  namespace App {
    interface Locals {
      /** Who acts; null where nobody is signed in. */
      act: Act | null;
      /** What an instrument's token is limited to; null for a person's session. */
      scopes: readonly string[] | null;
      requestId: string;
      /** Set when the request failed unexpectedly. */
      errorId?: string;
    }
    interface Error {
      message: string;
      /** Names the entry in the log; empty where there is none. */
      errorId: string;
      /** What to do next, where there is something. */
      next?: string;
    }
  }
}

export {};
