import { EditError, type Edit } from '$lib/task/commands';
import type { TaskDocument } from '$lib/task/schema';

/** Makes an edit from the present document and applies it; a refusal comes back as its sentence. */
export type Act = (make: (document: TaskDocument) => Edit) => string | undefined;

/** The part of the editor that forms need. */
export interface FormEditor {
  readonly document: TaskDocument;
  apply(edit: Edit): unknown;
}

export const actOn =
  (editor: FormEditor): Act =>
  (make) => {
    try {
      editor.apply(make(editor.document));
      return undefined;
    } catch (error) {
      if (error instanceof EditError) return error.message;
      throw error;
    }
  };
