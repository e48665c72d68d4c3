/** A document under construction by the same commands that the screens use. */
import { addItem, editItem, type Edit } from '$lib/task/commands';
import { newDocument, type NewTask } from '$lib/task/create';
import type { Item, ItemKind, TaskDocument } from '$lib/task/schema';

export class Draft {
  readonly words: string[] = [];
  constructor(public document: TaskDocument) {}

  static of(task: NewTask): Draft {
    return new Draft(newDocument(task));
  }
  /** Take an edit; gives back what the command returned beside it (the new thing's id). */
  take<E extends Edit>(command: (document: TaskDocument) => E): E {
    const edit = command(this.document);
    this.document = edit.document;
    this.words.push(edit.words);
    return edit;
  }
  /** Put an item on a card. Only those named so here are modelled. */
  item<K extends ItemKind>(card: string, kind: K, change: Partial<Extract<Item, { kind: K }>>): string {
    const { itemId } = this.take((d) => addItem(d, card, kind));
    this.take((d) => editItem(d, card, itemId, { modelled: false, ...change } as Partial<Item>));
    return itemId;
  }
}
