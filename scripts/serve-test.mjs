/** The built application on a throw-away database and data folder, for browser tests.   node scripts/serve-test.mjs PORT */
import { startTestDatabase } from './pg.mjs';

let leaving = false;
let loaded = false;
let database = null;
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'])
  process.on(signal, () => {
    leaving = true; // once serve.mjs is loaded it ends the rest in order
    if (database && !loaded) process.exit(0);
  });

database = await startTestDatabase();
process.on('exit', () => database.stop());
if (leaving) process.exit(0);
process.env.DATABASE_URL = database.url;
process.env.DATABASE_OWNER_URL = database.ownerUrl;
process.env.DATA_DIR = `${database.folder}/files`;
// All tests come from one address; the limit for an account stays as it is.
process.env.SIGN_IN_LIMIT_ADDRESS ??= '10000';
loaded = true;
await import('./serve.mjs');
