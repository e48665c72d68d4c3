/** Short messages that go away by themselves. Nothing that must be read stands only here. */
export interface Toast {
  id: number;
  words: string;
  level: 'note' | 'red';
}

class Toasts {
  list = $state<Toast[]>([]);
  #next = 1;

  say(words: string, level: Toast['level'] = 'note', milliseconds = 6000) {
    const id = this.#next++;
    this.list = [...this.list.slice(-2), { id, words, level }];
    setTimeout(() => this.dismiss(id), milliseconds);
  }

  dismiss(id: number) {
    this.list = this.list.filter((toast) => toast.id !== id);
  }
}

export const toasts = new Toasts();
export const toast = (words: string, level?: Toast['level']) => toasts.say(words, level);
