/** The few class lists that every form of the editor shares, so that they look and behave as one. */
export const panel = 'min-w-0 rounded-sheet border border-rule bg-sheet px-4 py-3.5';
export const heading = 'm-0 mb-3 text-fine font-bold text-soft';
export const label = 'mb-1 block font-bold';
export const softLabel = 'mb-0.5 block text-fine text-soft';
export const input =
  'min-h-9 w-full min-w-0 rounded-sheet border border-rule-strong bg-sheet px-2.5 py-1.5 text-ink disabled:border-rule disabled:text-soft aria-invalid:border-warm';
export const quiet =
  'inline-flex min-h-9 cursor-pointer items-center justify-center gap-2 rounded-sheet border border-rule-strong bg-sheet px-3.5 py-1.5 text-ink no-underline select-none hover:bg-tide-wash disabled:cursor-not-allowed disabled:opacity-55';
export const main =
  'inline-flex min-h-9 cursor-pointer items-center justify-center gap-2 rounded-sheet border border-tide bg-tide px-3.5 py-1.5 font-bold text-sheet no-underline select-none hover:brightness-110 disabled:cursor-not-allowed disabled:opacity-55';
export const plain =
  'inline-flex min-h-9 cursor-pointer items-center justify-center rounded-sheet border border-transparent bg-transparent px-2 py-1 text-soft hover:border-rule hover:text-ink disabled:cursor-not-allowed disabled:opacity-55';
export const link = 'font-bold text-tide underline-offset-2 hover:underline';
export const mistake = 'm-0 mt-1 text-fine font-bold text-warm';
export const hint = 'm-0 mt-1 text-fine text-soft';
