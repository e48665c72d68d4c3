import type { Checked } from './numbers';

/**
 * What stands in a field while it differs from the document. A good draft is committed when the field is left,
 * on Enter, or after a pause in typing; a bad one stays as typed with its sentence, and the document keeps its
 * last good value. Escape gives the draft up.
 */
export class Draft<T> {
  text: string | null = $state(null);
  message: string | null = $state(null);
  #timer: ReturnType<typeof setTimeout> | undefined;

  constructor(
    private readonly check: (text: string) => Checked<T>,
    private readonly shown: () => string,
    private readonly commit: (value: T) => string | void,
    private readonly pause = 0
  ) {}

  get value(): string {
    return this.text ?? this.shown();
  }

  type(text: string): void {
    this.text = text;
    const checked = this.check(text);
    // A mistake already shown is corrected at once; a new one waits until the field is left.
    if (this.message !== null) this.message = checked.ok ? null : checked.message;
    clearTimeout(this.#timer);
    if (this.pause > 0 && checked.ok) this.#timer = setTimeout(() => this.#send(checked.value), this.pause);
  }

  leave(): void {
    clearTimeout(this.#timer);
    if (this.text === null) return;
    const checked = this.check(this.text);
    if (!checked.ok) {
      this.message = checked.message;
      return;
    }
    this.#send(checked.value);
    if (this.message === null) this.text = null;
  }

  drop(): void {
    clearTimeout(this.#timer);
    this.text = null;
    this.message = null;
  }

  #send(value: T): void {
    if (this.text === this.shown()) {
      this.message = null;
      return;
    }
    // A commit may refuse for a reason that only the whole document knows.
    const refusal = this.commit(value);
    // An arrow function may give back what it assigned; only a sentence is a refusal.
    this.message = typeof refusal === 'string' ? refusal : null;
    if (this.message === null && this.text === this.shown()) this.text = null;
  }
}
