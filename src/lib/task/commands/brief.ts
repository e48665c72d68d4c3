/** Edits of the brief: words, conditions, contrasts, responses. Each checks the changed part before it is taken. */
import { newCondition, newContrast, newResponse } from '../create';
import {
  briefSchema,
  type Brief,
  type Condition,
  type Contrast,
  type ResponseName,
  type TaskDocument
} from '../schema';
import { count, EditError, withBrief, type Edit } from './edit';

/** Names of brief fields, as the screens and the edits in words say them. */
const FIELD: Partial<Record<keyof Brief, string>> = {
  tr: 'TR',
  volumes: 'volumes',
  highPass: 'high-pass cutoff',
  noise: 'noise',
  profile: 'scanner profile',
  expected: 'expected effect and noise'
};

function checked(doc: TaskDocument, change: Partial<Brief>): TaskDocument {
  const next = withBrief(doc, change);
  const parsed = briefSchema.safeParse(next.brief);
  if (!parsed.success) {
    const issue = parsed.error.issues[0]!;
    throw new EditError(`${issue.path.map(String).join('.') || 'brief'}: ${issue.message}`);
  }
  return next;
}

/** Changes plain fields of the brief. */
export function editBrief(doc: TaskDocument, change: Partial<Brief>): Edit {
  const fields = Object.keys(change) as (keyof Brief)[];
  return {
    document: checked(doc, change),
    words: `changed ${fields.map((f) => FIELD[f] ?? f).join(' and ')}`
  };
}

function refuseSameName(names: string[], name: string, what: string) {
  if (names.includes(name))
    throw new EditError(`There is a ${what} named ‘${name}’ already. Choose another name.`);
}

export function addCondition(doc: TaskDocument, name?: string): Edit & { conditionId: string } {
  const { conditions } = doc.brief;
  if (name !== undefined)
    refuseSameName(
      conditions.map((c) => c.name),
      name,
      'condition'
    );
  const condition = newCondition(conditions, name);
  return {
    document: checked(doc, { conditions: [...conditions, condition] }),
    words: `added condition ${condition.name}`,
    conditionId: condition.id
  };
}

export function editCondition(doc: TaskDocument, id: string, change: Partial<Omit<Condition, 'id'>>): Edit {
  const { conditions } = doc.brief;
  const now = conditions.find((c) => c.id === id);
  if (!now) throw new EditError('This condition is no longer part of the task.');
  if (change.name !== undefined)
    refuseSameName(
      conditions.filter((c) => c.id !== id).map((c) => c.name),
      change.name,
      'condition'
    );
  return {
    document: checked(doc, { conditions: conditions.map((c) => (c.id === id ? { ...c, ...change } : c)) }),
    words: `changed ${Object.keys(change).join(' and ')} of condition ${change.name ?? now.name}`
  };
}

/** Removes a condition, its weights in every contrast, and its mark on cards (the cards stay, without condition). */
export function removeCondition(doc: TaskDocument, id: string): Edit {
  const now = doc.brief.conditions.find((c) => c.id === id);
  if (!now) throw new EditError('This condition is no longer part of the task.');
  const brief = withBrief(doc, {
    conditions: doc.brief.conditions.filter((c) => c.id !== id),
    contrasts: doc.brief.contrasts.map((c) => ({
      ...c,
      weights: Object.fromEntries(Object.entries(c.weights).filter(([key]) => key !== id))
    }))
  });
  return {
    document: {
      ...brief,
      cards: brief.cards.map((c) => (c.condition === id ? { ...c, condition: null } : c))
    },
    words: `removed condition ${now.name}`
  };
}

/** Puts conditions into the given order of ids. */
export function orderConditions(doc: TaskDocument, ids: readonly string[]): Edit {
  const byId = new Map(doc.brief.conditions.map((c) => [c.id, c]));
  const conditions = ids.map((id) => byId.get(id)).filter((c): c is Condition => c !== undefined);
  if (conditions.length !== byId.size || new Set(ids).size !== byId.size)
    throw new EditError('The new order must name every condition once.');
  return { document: withBrief(doc, { conditions }), words: 'reordered the conditions' };
}

export function addContrast(
  doc: TaskDocument,
  name: string,
  weights: Record<string, number> = {}
): Edit & { contrastId: string } {
  refuseSameName(
    doc.brief.contrasts.map((c) => c.name),
    name,
    'contrast'
  );
  const contrast = newContrast(name, weights);
  return {
    document: checked(doc, { contrasts: [...doc.brief.contrasts, contrast] }),
    words: `added contrast ${name}`,
    contrastId: contrast.id
  };
}

export function editContrast(doc: TaskDocument, id: string, change: Partial<Omit<Contrast, 'id'>>): Edit {
  const { contrasts } = doc.brief;
  const now = contrasts.find((c) => c.id === id);
  if (!now) throw new EditError('This contrast is no longer part of the task.');
  if (change.name !== undefined)
    refuseSameName(
      contrasts.filter((c) => c.id !== id).map((c) => c.name),
      change.name,
      'contrast'
    );
  return {
    document: checked(doc, { contrasts: contrasts.map((c) => (c.id === id ? { ...c, ...change } : c)) }),
    words: `changed ${Object.keys(change).join(' and ')} of contrast ${change.name ?? now.name}`
  };
}

export function removeContrast(doc: TaskDocument, id: string): Edit {
  const now = doc.brief.contrasts.find((c) => c.id === id);
  return {
    document: withBrief(doc, { contrasts: doc.brief.contrasts.filter((c) => c.id !== id) }),
    words: `removed contrast ${now?.name ?? ''}`
  };
}

export function addResponse(
  doc: TaskDocument,
  name: string,
  finger?: ResponseName['finger']
): Edit & { responseId: string } {
  refuseSameName(
    doc.brief.responses.map((r) => r.name),
    name,
    'response'
  );
  const response = newResponse(name, finger);
  return {
    document: checked(doc, { responses: [...doc.brief.responses, response] }),
    words: `added response ${name}`,
    responseId: response.id
  };
}

export function editResponse(doc: TaskDocument, id: string, change: Partial<Omit<ResponseName, 'id'>>): Edit {
  const { responses } = doc.brief;
  const now = responses.find((r) => r.id === id);
  if (!now) throw new EditError('This response is no longer part of the task.');
  if (change.name !== undefined)
    refuseSameName(
      responses.filter((r) => r.id !== id).map((r) => r.name),
      change.name,
      'response'
    );
  return {
    document: checked(doc, { responses: responses.map((r) => (r.id === id ? { ...r, ...change } : r)) }),
    words: `changed response ${change.name ?? now.name}`
  };
}

/** Removes a named response, and its mention in every response window. */
export function removeResponse(doc: TaskDocument, id: string): Edit {
  const now = doc.brief.responses.find((r) => r.id === id);
  let touched = 0;
  const cards = doc.cards.map((card) => ({
    ...card,
    windows: card.windows.map((w) => {
      if (w.correct !== id && !w.allowed.includes(id)) return w;
      touched++;
      return {
        ...w,
        correct: w.correct === id ? null : w.correct,
        allowed: w.allowed.filter((r) => r !== id)
      };
    })
  }));
  const document = withBrief(
    { ...doc, cards },
    { responses: doc.brief.responses.filter((r) => r.id !== id) }
  );
  const also = touched ? ` and its mention in ${count(touched, 'window')}` : '';
  return { document, words: `removed response ${now?.name ?? ''}${also}` };
}
