/** One form's sending: `busy` while it is under way; after a refusal the first wrong field takes the focus. */
import { tick } from 'svelte';
import type { SubmitFunction } from '@sveltejs/kit';

export class Submit {
  busy = $state(false);
  #after?: () => void;

  /** `after` runs when the server accepted the form. */
  constructor(after?: () => void) {
    this.#after = after;
  }

  readonly send: SubmitFunction = ({ formElement }) => {
    this.busy = true;
    return async ({ result, update }) => {
      // What was typed stays after a refusal; an accepted form is emptied.
      await update({ reset: result.type === 'success' });
      this.busy = false;
      await tick();
      if (result.type === 'failure') {
        const first = (selector: string) => formElement.querySelector<HTMLElement>(selector);
        (first('[aria-invalid="true"]') ?? first('[data-form-message]'))?.focus();
      }
      if (result.type === 'success') this.#after?.();
    };
  };
}
