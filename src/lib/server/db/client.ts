/** Connections. Repositories take what is made here, or a transaction of it. */
import knex, { type Knex } from 'knex';
import { config } from '../config';

export function connect(url: string, pool = 10): Knex {
  return knex({ client: 'pg', connection: url, pool: { min: 0, max: pool } });
}

let current: Knex | null = null;
/** The application's own pool, as the role `ebbline_app`. */
export const database = (): Knex => (current ??= connect(config().databaseUrl, config().pool));

export async function closeDatabase(): Promise<void> {
  await current?.destroy();
  current = null;
}
