/** Says plainly when a database was already used by a newer Ebbline, instead of letting the migrations stumble. */
import { readdirSync } from 'node:fs';
import { PlainError } from './system.mjs';

/**
 * @param {string} url address of the database, with a role that may read `knex_migrations`
 * @param {string} folder the migrations this copy knows
 */
export async function refuseNewerData(url, folder) {
  const { default: pg } = await import('pg');
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 10_000 });
  try {
    await client.connect();
  } catch (error) {
    throw new PlainError(
      `The database does not answer (${error.message}): check DATABASE_URL and that it runs.`
    );
  }
  try {
    const there = await client.query("select to_regclass('public.knex_migrations') as name");
    if (!there.rows[0].name) return;
    const known = new Set(readdirSync(folder));
    const { rows } = await client.query('select name from public.knex_migrations order by id');
    const newer = rows.map((row) => row.name).filter((name) => !known.has(name));
    if (newer.length)
      throw new PlainError(
        `The data were last used by a newer Ebbline (it added ${newer.join(', ')}, unknown to this copy): ` +
          'bring this copy up to date, or point DATA_DIR at another folder.'
      );
  } finally {
    await client.end();
  }
}
