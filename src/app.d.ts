import type { Act } from '$lib/server/platform/act';

declare global {
  namespace App {
    interface Locals {
      /** Who acts; null where nobody is signed in. */
      act: Act | null;
      requestId: string;
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
