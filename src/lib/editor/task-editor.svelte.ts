/**
 * The editor of one task. State is split by how long it lives: the document with its history (undoable), the view
 * (remembered on this machine), and what passes (selection, preview of a gesture, announcements).
 *
 * The document is plain immutable JSON held raw: commands make a new one, nothing writes into it.
 */
import { compileRun, factorsOf } from '$lib/task/compile';
import { EditError, type Edit } from '$lib/task/commands';
import { canRedo, canUndo, commit, redo, startHistory, undo, type History } from '$lib/task/history';
import type { Profile } from '$lib/task/profile';
import { defaultProfile } from '$lib/task/profile';
import type { Run, TaskDocument } from '$lib/task/schema';
import { Autosave } from './autosave.svelte';
import { httpClient, type DocumentClient } from './document-client';
import { browserStore, type KeptStore } from './kept-edits';
import { DesignView } from './page/design-view.svelte';
import type { GestureHost } from './page/gesture';
import { idSet } from './plain';
import { tabId, tabIsOpen } from './tab-id';
import { ViewMemory } from './view-memory.svelte';

export type Role = 'owner' | 'experimenter' | 'operator' | 'reader';

export interface TaskEditorOptions {
  taskId: string;
  userId: string;
  role: Role;
  saveNumber: number;
  document: TaskDocument;
  profile: Profile | null;
  client?: DocumentClient;
  store?: KeptStore;
}

export class TaskEditor implements GestureHost {
  readonly taskId: string;
  readonly role: Role;
  /** Owners and experimenters edit; for the others the server would refuse, so nothing is offered. */
  readonly canEdit: boolean;
  readonly autosave: Autosave;
  readonly view = new ViewMemory();
  /** The scanner profile that the task is planned with, or one with every field at its default. */
  profile = $state.raw<Profile>(defaultProfile('Plain defaults'));

  #history = $state.raw<History>()!;
  #preview = $state.raw<Edit | null>(null);
  #runId = $state<string>('');

  /** Ids of the selected trials of the run. */
  selection = $state.raw(idSet());
  /** A refused edit in one sentence, until the next edit or its dismissal. */
  problem = $state<string | null>(null);
  /** Spoken by the live region. */
  announcement = $state('');

  /** What is on screen: the document, or the outcome of the gesture under way. */
  readonly shown = $derived(this.#preview?.document ?? this.document);
  readonly run: Run = $derived(this.#runIn(this.shown));
  /** The run as it is on screen. */
  readonly compiled = $derived(compileRun(this.shown, this.run));
  /** The run as it is in the document, whatever a gesture previews. */
  readonly settled = $derived(compileRun(this.document, this.#runIn(this.document)));
  readonly factors = $derived(factorsOf(this.shown));
  /** Predicted signal, efficiency, VIF, correlations and Notices of the run on screen. */
  readonly design: DesignView;

  constructor(options: TaskEditorOptions) {
    this.taskId = options.taskId;
    this.role = options.role;
    this.canEdit = options.role === 'owner' || options.role === 'experimenter';
    if (options.profile) this.profile = options.profile;
    this.#history = startHistory(options.document);
    this.#runId = options.document.runs[0]?.id ?? '';
    this.autosave = new Autosave({
      owner: `${options.userId}:${options.taskId}`,
      tab: tabId,
      isOpen: tabIsOpen,
      saveNumber: options.saveNumber,
      client: options.client ?? httpClient(options.taskId),
      store: options.store ?? browserStore()
    });
    this.design = new DesignView(this);
  }

  get document(): TaskDocument {
    return this.#history.present;
  }
  get history(): History {
    return this.#history;
  }
  get runId(): string {
    return this.run.id;
  }
  get canUndo(): boolean {
    return this.canEdit && canUndo(this.#history);
  }
  get canRedo(): boolean {
    return this.canEdit && canRedo(this.#history);
  }
  get isPreviewing(): boolean {
    return this.#preview !== null;
  }

  /** Takes up edits that an earlier page could not save. */
  async takeUpKept(): Promise<void> {
    if (!this.canEdit) return;
    const kept = await this.autosave.restore(this.document);
    if (!kept) return;
    this.#history = commit(this.#history, { document: kept, words: 'edits kept in this browser' });
    this.announce('Edits that had not been saved were taken up again from this browser.');
  }

  /**
   * Makes an edit. The argument is an edit, or a command still to be called with the document. A refused command
   * (EditError) changes nothing: its message is shown and null is returned.
   */
  apply<E extends Edit>(edit: E | ((document: TaskDocument) => E)): E | null {
    if (!this.canEdit) {
      this.problem = `Your role in this lab is ${this.role}: you see everything and change nothing. Ask an owner for the role of experimenter.`;
      return null;
    }
    const made = this.attempt(() => (typeof edit === 'function' ? edit(this.document) : edit));
    if (!made || made.document === this.document) return made;
    this.#preview = null;
    this.#history = commit(this.#history, made);
    this.#saved(made.words);
    return made;
  }

  /** The result of a command, or null with its refusal shown. */
  attempt<T>(command: () => T): T | null {
    try {
      this.problem = null;
      return command();
    } catch (error) {
      if (!(error instanceof EditError)) throw error;
      this.problem = error.message;
      return null;
    }
  }

  preview(edit: Edit | null): void {
    this.#preview = edit;
  }

  commit(edit: Edit): void {
    if (this.apply(edit)) this.announce(sentence(edit.words));
  }

  undo(): void {
    const step = this.#history.done.at(-1);
    if (step && this.canUndo) this.#travel(undo(this.#history), `Undone: ${step.words}`);
  }

  redo(): void {
    const step = this.#history.undone.at(-1);
    if (step && this.canRedo) this.#travel(redo(this.#history), `Done again: ${step.words}`);
  }

  /** Begins anew with another save's document; what was done here cannot be undone into it. */
  reset(document: TaskDocument): void {
    this.#preview = null;
    this.#history = startHistory(document);
    this.#prune();
  }

  chooseRun(runId: string): void {
    this.#preview = null;
    this.#runId = runId;
    this.selection = idSet();
  }

  select(ids: Iterable<string>): void {
    this.selection = idSet(ids);
  }

  announce(text: string): void {
    // The same words twice are spoken twice only if the text differs.
    this.announcement = text === this.announcement ? `${text}\u00a0` : text;
  }

  #runIn(document: TaskDocument): Run {
    const run = document.runs.find((r) => r.id === this.#runId) ?? document.runs[0];
    if (!run) throw new Error('A task document holds at least one run.');
    return run;
  }

  #travel(history: History, words: string): void {
    const before = this.document;
    this.#preview = null;
    this.problem = null;
    this.#history = history;
    // Show where something happened: the first run that the step changed.
    const changed = this.document.runs.find((run) => !before.runs.includes(run));
    if (changed && !this.document.runs.some((r) => r.id === this.#runId && !before.runs.includes(r)))
      this.#runId = changed.id;
    this.#prune();
    this.announce(`${words}.`);
    this.#saved(words);
  }

  #saved(words: string): void {
    this.#prune();
    this.autosave.edited(this.document, words);
  }

  /** Trials that are gone are no longer selected; a run that is gone is no longer chosen. */
  #prune(): void {
    if (!this.document.runs.some((r) => r.id === this.#runId)) this.#runId = this.document.runs[0]?.id ?? '';
    const alive = idSet(this.#runIn(this.document).trials.map((t) => t.id));
    if ([...this.selection].some((id) => !alive.has(id)))
      this.selection = idSet([...this.selection].filter((id) => alive.has(id)));
  }
}

const sentence = (words: string): string => `${words.charAt(0).toUpperCase()}${words.slice(1)}.`;
