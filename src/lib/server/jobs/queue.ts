/** The job queue, in a schema of its own that the application's role owns. */
import PgBoss from 'pg-boss';
import { config } from '../config';
import { QUEUE_SCHEMA } from '../db/queue-schema';

export async function openQueue(url = config().databaseUrl): Promise<PgBoss> {
  const queue = new PgBoss({ connectionString: url, schema: QUEUE_SCHEMA, max: 3 });
  queue.on('error', (error) => console.error(`Job queue: ${error.message}`));
  await queue.start();
  return queue;
}
