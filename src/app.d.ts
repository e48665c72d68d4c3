import type { Knex } from 'knex';
import type { Session } from 'lucia';
import type { SessionUser } from '$lib/server/auth/lucia';

declare global {
  namespace App {
    interface Error {
      message: string;
      code?: string;
      details?: { path: string; message: string }[];
      /** With 412: where the task stands now. */
      current?: { saveNumber: number; author: string | null; savedAt: string };
      /** With 429: seconds until another try is taken. */
      retryAfter?: number;
    }
    interface Locals {
      db: Knex;
      user: SessionUser | null;
      session: Session | null;
      /** Path and query asked for; where sign-in returns to. */
      path: string;
    }
  }
}

export {};
