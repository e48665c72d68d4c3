import { describe, expect, it } from 'vitest';
import { readPayload, type PlayerPayload } from '../../../src/lib/player/payload';
import { hashOf } from '../../../src/lib/task/canonical';
import { profileWith, smallTask } from './support';

function payload(): PlayerPayload {
  const { doc } = smallTask();
  const profile = profileWith();
  return {
    format: 1,
    kind: 'PROOF',
    document: doc,
    revision: hashOf(doc),
    saveNumber: 3,
    profile,
    profileHash: hashOf(profile),
    study: { label: 'marram', name: 'Marram' },
    lab: 'Marram Lab',
    plan: [
      { participant: '07', session: '1', runs: ['run001'], responses: { goleft: 'left-index' }, seed: 's' }
    ],
    assets: {},
    build: 'b',
    madeAt: '2026-01-01T00:00:00Z'
  };
}
const problemsOf = (value: unknown): string[] => {
  const read = readPayload(value);
  return read.ok ? [] : read.problems;
};

describe('a payload', () => {
  it('is read back as it was written', () => {
    const value = payload();
    expect(readPayload(JSON.parse(JSON.stringify(value)))).toEqual({ ok: true, payload: value });
  });

  it('is refused with the place of what is wrong', () => {
    expect(problemsOf({ ...payload(), kind: 'REAL' })[0]).toContain('kind');
    expect(problemsOf({ ...payload(), revision: 'abc' })).toEqual(['revision: a SHA-256 in hex']);
    expect(problemsOf(null)).toHaveLength(1);
    const document = { ...payload().document, runs: [] };
    expect(problemsOf({ ...payload(), document, plan: [] })).toEqual([
      'document.runs: a bundle needs at least one run'
    ]);
  });

  it('is refused where the plan names a run that the document has not', () => {
    const plan = [{ participant: '07', session: null, runs: ['run009'], responses: {}, seed: '' }];
    expect(problemsOf({ ...payload(), plan })).toEqual([
      'plan.0.runs: there is no run run009 in the document'
    ]);
  });

  it('is refused with a participant code that could not stand in a file name', () => {
    const plan = [{ participant: '../07', session: null, runs: ['run001'], responses: {}, seed: '' }];
    expect(problemsOf({ ...payload(), plan })).toEqual(['plan.0.participant: letters and digits only']);
  });
});
