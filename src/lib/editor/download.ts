/** Gives the person a file of something that is only in this page. */
import type { TaskDocument } from '$lib/task/schema';

export function downloadDocument(document_: TaskDocument, note: string): void {
  const name = document_.brief.label || 'task';
  const blob = new Blob([`${JSON.stringify(document_, null, 2)}\n`], { type: 'application/json' });
  const link = document.createElement('a');
  link.href = URL.createObjectURL(blob);
  link.download = `${name}-${note}.ebbline.json`;
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
}
