import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonicalJson, hashOf, sha256Hex } from '../../../src/lib/task/canonical';
import { hashesOf, joinDocument, splitDocument } from '../../../src/lib/task/parts';
import { setVolumes } from '../../../src/lib/task/commands';
import { sampleTask, withTrials } from './sample';

describe('canonical JSON', () => {
  it('sorts keys by UTF-16 code units and prints numbers as ECMAScript does (RFC 8785, section 3.2)', () => {
    // The example of RFC 8785, 3.2.3: keys in the order of the standard's own sorted output.
    const value = {
      '\u20ac': 'Euro Sign',
      '\r': 'Carriage Return',
      '\ufb33': 'Hebrew Letter Dalet With Dagesh',
      '1': 'One',
      '\ud83d\ude00': 'Emoji: Grinning Face',
      '\u0080': 'Control',
      '\u00f6': 'Latin Small Letter O With Diaeresis'
    };
    expect(Object.keys(JSON.parse(canonicalJson(value))).sort()).toEqual(Object.keys(value).sort());
    expect([...canonicalJson(value).matchAll(/:"([^"]+)"/g)].map((m) => m[1])).toEqual([
      'Carriage Return',
      'One',
      'Control',
      'Latin Small Letter O With Diaeresis',
      'Euro Sign',
      'Emoji: Grinning Face',
      'Hebrew Letter Dalet With Dagesh'
    ]);
    expect(canonicalJson([Number('333333333.33333329'), 1e30, 4.5, 2e-3, 1e-27, -0])).toBe(
      '[333333333.3333333,1e+30,4.5,0.002,1e-27,0]'
    );
  });

  it('refuses what JSON cannot say', () => {
    expect(() => canonicalJson({ a: NaN })).toThrow(/finite/);
    expect(() => canonicalJson([Infinity])).toThrow(/finite/);
    expect(() => canonicalJson(() => 1)).toThrow(/plain data/);
  });

  it('parses back to the same value, whatever the order of keys', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        const text = canonicalJson(value);
        expect(canonicalJson(JSON.parse(text))).toBe(text);
      })
    );
    expect(hashOf({ a: 1, b: [2, { d: 3, c: 4 }] })).toBe(hashOf({ b: [2, { c: 4, d: 3 }], a: 1 }));
  });

  it('hashes as Node’s own SHA-256 does', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme' }), (text) => {
        expect(sha256Hex(text)).toBe(createHash('sha256').update(text, 'utf8').digest('hex'));
      })
    );
  });
});

describe('parts', () => {
  it('gives the same document back', () => {
    const sample = sampleTask();
    const doc = withTrials(sample, [
      ['lantern', 3],
      ['chime', 9]
    ]);
    const { manifest, parts } = splitDocument(doc);
    expect(joinDocument(manifest, parts)).toEqual(doc);
    expect(new Set(hashesOf(manifest))).toEqual(new Set(Object.keys(parts)));
  });

  it('stores only what an edit changed', () => {
    const { doc, runId } = sampleTask();
    const before = splitDocument(doc).parts;
    const after = splitDocument(setVolumes(doc, runId, 120).document).parts;
    expect(Object.keys(after).filter((h) => !(h in before))).toHaveLength(1);
  });

  it('names a part that the store has lost', () => {
    const { manifest, parts } = splitDocument(sampleTask().doc);
    const { [manifest.brief]: _, ...rest } = parts;
    expect(() => joinDocument(manifest, rest)).toThrow(manifest.brief);
  });
});
