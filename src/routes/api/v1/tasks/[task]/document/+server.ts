import { z } from 'zod';
import { endpoint } from '$lib/server/api/endpoint';
import { documentShape, saveShape, taskParam } from '$lib/server/api/shapes';
import { currentDocument, saveTask, wordsSchema } from '$lib/server/services/documents';

/** The document alone is taken too, as it was given; then nothing is known of the edits in words. */
const body = z.union([
  z.strictObject({ document: z.looseObject({}), words: wordsSchema }),
  z.looseObject({ format: z.number(), brief: z.unknown() })
]);

export const GET = endpoint({
  summary: 'The task document, with its save number as ETag',
  right: 'read',
  params: taskParam,
  answer: documentShape,
  versioned: 'etag',
  handler: async ({ db, lab, params, event }) => {
    const { task, document } = await currentDocument(db, lab, params.task);
    event.setHeaders({ etag: `"${task.saveNumber}"` });
    return { saveNumber: task.saveNumber, document };
  }
});

export const PUT = endpoint({
  summary: 'Save the whole document: { document, words } with the edits in words, or the document alone',
  right: 'edit',
  params: taskParam,
  body,
  answer: saveShape,
  versioned: 'if-match',
  handler: async (call) => {
    const { base, body } = call;
    const { document, words } = 'words' in body && 'document' in body ? body : { document: body, words: [] };
    const saved = await saveTask(call.db, {
      lab: call.lab,
      task: call.params.task,
      base,
      document,
      words: words as string[],
      author: call.user.id
    });
    call.event.setHeaders({ etag: `"${saved.saveNumber}"` });
    return saved;
  }
});
