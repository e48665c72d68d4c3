/** The task's editor, given to every page below the task layout. */
import { getContext, setContext } from 'svelte';
import type { TaskEditor } from './task-editor.svelte';

const KEY = Symbol('task editor');

export const setEditor = (editor: TaskEditor): TaskEditor => setContext(KEY, editor);

export function getEditor(): TaskEditor {
  const editor = getContext<TaskEditor | undefined>(KEY);
  if (!editor) throw new Error('This component belongs below the layout of a task.');
  return editor;
}
