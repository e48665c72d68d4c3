import { describe, expect, it } from 'vitest';
import { newCondition, newDocument, newId, suggestLabel } from '../../../src/lib/task/create';
import { documentSchema, type Condition } from '../../../src/lib/task/schema';
import { readDocument } from '../../../src/lib/task/upgrade';

describe('new documents', () => {
  it('suggests a label that BIDS takes', () => {
    expect(suggestLabel('Chime and Lantern')).toBe('chimeAndLantern');
    expect(suggestLabel('Größe & 2 Töne')).toBe('groE2Tone');
    expect(suggestLabel('🏮 פנס')).toBe('task');
    for (const title of ['a-b_c', '</script>', 'x'.repeat(200)])
      expect(suggestLabel(title)).toMatch(/^[A-Za-z0-9]{1,40}$/);
  });

  it('gives a sound document, and ids that are never alike', () => {
    const doc = newDocument({ title: 'Chime', label: 'chime', tr: 735_000, volumes: 400 });
    expect(documentSchema.safeParse(doc).success).toBe(true);
    expect(readDocument(doc)).toMatchObject({ ok: true });
    expect(new Set(Array.from({ length: 2000 }, newId)).size).toBe(2000);
  });

  it('no two of sixteen conditions share colour and pattern', () => {
    const made: Condition[] = [];
    for (let i = 0; i < 16; i++) made.push(newCondition(made));
    expect(new Set(made.map((c) => `${c.colour} ${c.pattern}`)).size).toBe(16);
    expect(new Set(made.map((c) => c.name)).size).toBe(16);
  });
});
