/** For the command line only (`npm run knex -- migrate:make name`); the app runs the same files at start. */
import type { Knex } from 'knex';

const config: Knex.Config = {
  client: 'pg',
  connection: process.env.DATABASE_OWNER_URL ?? process.env.DATABASE_URL,
  migrations: { directory: './migrations', extension: 'ts', loadExtensions: ['.ts'] }
};
export default config;
