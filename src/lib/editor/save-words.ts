/** What the header says of the save, and how urgently. */
import type { Autosave } from './autosave.svelte';

export function saveWords(autosave: Autosave, canEdit: boolean): { words: string; level: 'calm' | 'warn' } {
  const { state, saveNumber } = autosave;
  if (!canEdit) return { words: `No. ${saveNumber}, to read`, level: 'calm' };
  switch (state.kind) {
    case 'saved':
      return { words: `Saved, no. ${saveNumber}`, level: 'calm' };
    case 'saving':
      return { words: 'Saving…', level: 'calm' };
    case 'waiting':
      return { words: 'Waiting for the server', level: 'warn' };
    case 'stale':
      return { words: 'Not saved: a newer save exists', level: 'warn' };
    case 'signed-out':
      return { words: 'Not saved: signed out', level: 'warn' };
    case 'refused':
      return { words: 'Not saved: refused', level: 'warn' };
  }
}
