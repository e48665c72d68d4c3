import { describe, expect, it } from 'vitest';
import { consoleCard } from '../../../src/lib/bundle/console-card';
import { runList } from '../../../src/lib/bundle/run-list';
import { keyInWords, scanFacts } from '../../../src/lib/bundle/scan-facts';
import { CAUTIONS, englishTexts } from '../../../src/lib/bundle/texts';
import { sampleDocument, sampleInput, sampleProfile } from '../../fixtures/sample-bundle';

const document = sampleDocument({ tr: 1_500_000, volumes: 300 });
const facts = (changes: Parameters<typeof sampleProfile>[0]) =>
  scanFacts(document, document.runs[0]!, sampleProfile(changes));

describe('scanFacts', () => {
  it('counts dummies with pulses among the volumes to type: 302 volumes of 1.5 s are 7:33', () => {
    expect(facts({ pulsesBeforeZero: 2 })).toEqual({
      volumesToType: 302,
      storedVolumes: 300,
      dummiesWithPulses: 2,
      silentDummies: 0,
      tr: 1.5,
      total: '7:33',
      zeroPulse: 3
    });
  });

  it('adds silent dummies to the time but not to the volumes to type', () => {
    expect(facts({ silentDummies: 4 })).toMatchObject({ volumesToType: 300, total: '7:36', zeroPulse: 1 });
  });

  it('counts pulses, not volumes, where a volume has several', () => {
    const pulses = { mode: 'several-per-volume' as const, perVolume: 8 };
    expect(facts({ pulses, pulsesBeforeZero: 2 }).zeroPulse).toBe(17);
  });

  it('names no pulse where the only one comes before zero', () => {
    const pulses = { mode: 'once' as const, perVolume: 1 };
    expect(facts({ pulses, pulsesBeforeZero: 2 }).zeroPulse).toBeNull();
    expect(facts({ pulses }).zeroPulse).toBe(1);
  });

  it('tells the top row from the keypad', () => {
    expect(keyInWords('Digit5')).toBe('5 (top row)');
    expect(keyInWords('Numpad5')).toBe('5 (keypad)');
    expect(keyInWords('Space')).toBe('Space');
  });
});

describe('the papers', () => {
  const profile = sampleProfile({ tr: 1.5, pulsesBeforeZero: 2, silentDummies: 1 });
  const input = sampleInput('void 0', {}, { document, profile });

  it('tell on the console card what to type, for each run', () => {
    const card = consoleCard(input, englishTexts);
    const row = (name: string) => new RegExp(`>${name}</th><td>([^<]*)<`).exec(card)?.[1];
    expect(row('Volumes to type')).toBe('302');
    expect(card).toContain('<small>of which the first 2 are dummies with pulses</small>');
    expect(row('TR')).toBe('1.5 s');
    expect(row('Total \\(min:s\\)')).toBe('7:35');
    expect(row('Silent dummies')).toBe('1, added by the scanner before the first pulse');
    expect(row('Pulses')).toBe('one pulse for every volume. The task starts with pulse 3.');
    expect(row('Trigger key')).toBe('5 (top row), code Digit5');
    expect(card).not.toContain('set that one, or do not run');
  });

  it('warn of a profile with another TR', () => {
    const other = { ...input, profile: sampleProfile({ tr: 2 }) };
    expect(consoleCard(other, englishTexts)).toContain('profile&#39;s own TR is 2 s');
  });

  it('carry every caution on the console card and in the read-me', () => {
    const card = consoleCard(input, englishTexts);
    const readMe = englishTexts.readMe({ kind: 'PROOF', title: 'Chime', mark: null, files: [] });
    for (const caution of CAUTIONS) {
      expect(card).toContain(caution.replaceAll("'", '&#39;'));
      expect(readMe).toContain(caution);
    }
  });

  it('list the planned runs of each participant in order', () => {
    const two = sampleDocument({ runs: 2 });
    const [first, second] = two.runs.map((run) => run.id);
    const plan = [
      { participant: '01', session: '1', runs: [second!, first!], responses: {}, seed: '1' },
      { participant: '02', session: null, runs: [first!], responses: {}, seed: '2' }
    ];
    const list = runList({ ...input, document: two, plan }, englishTexts);
    const cells = [
      ...list.matchAll(/<tr><td dir="auto">(.*?)<\/td><td dir="auto">(.*?)<\/td><td dir="auto">(.*?)<\/td>/g)
    ];
    expect(cells.map((row) => row.slice(1))).toEqual([
      ['sub-01', 'ses-1', '1: Run 2'],
      ['sub-01', 'ses-1', '2: Run 1'],
      ['sub-02', '', '1: Run 1']
    ]);
  });

  it('leave lines to fill in where there is no plan', () => {
    expect(runList(input, englishTexts).match(/sub-</g)).toHaveLength(6);
  });
});
