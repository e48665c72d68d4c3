/** The checker is checked: a good dataset is clean, and each fault put in is found by the checker said to find it. */
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { hedFindings, ownFindings, validateDataset, type BidsRun } from '../../e2e/support/bids';

const root = mkdtempSync(join(tmpdir(), 'ebbline-bids-'));
afterAll(() => rmSync(root, { recursive: true, force: true }));

const good: BidsRun = {
  stem: 'sub-01_task-lantern_run-01',
  tsv: 'onset\tduration\ttrial_type\n0.500\t1.000\tleft\n40.250\t1.000\tright\n',
  sidecar: JSON.stringify({
    trial_type: {
      LongName: 'Condition',
      Description: 'The side the lantern appeared on.',
      Levels: { left: 'on the left', right: 'on the right' },
      HED: { left: 'Sensory-event, Visual-presentation', right: 'Sensory-event, Visual-presentation' }
    }
  })
};
let count = 0;
const check = (run: BidsRun) =>
  validateDataset({
    folder: join(root, String(++count)),
    taskName: 'lantern',
    tr: 2,
    volumes: 30,
    runs: [run]
  });

describe('the BIDS checks of the browser tests', () => {
  it('find nothing in a good dataset', async () => {
    expect(await check(good)).toEqual({ errors: [], warnings: [] });
  }, 90_000);

  it('find a ragged row and a bad HED tag, by both validators', async () => {
    const { errors } = await check({
      ...good,
      tsv: good.tsv.replace('	right', ''),
      sidecar: good.sidecar.replace('Sensory-event', 'No-such-tag')
    });
    const codes = errors.map((one) => one.code);
    expect(codes.filter((code) => code.startsWith('TSV_EQUAL_ROWS'))).toHaveLength(2);
    expect(codes.some((code) => code.startsWith('HED_ERROR'))).toBe(true);
  }, 90_000);

  it('find a stimulus file that is absent, by both validators', async () => {
    const tsv = good.tsv
      .replace('trial_type', 'trial_type	stim_file')
      .replace('left', 'left	absent.png')
      .replace('right', 'right	n/a');
    const codes = (await check({ ...good, tsv })).errors.map((one) => one.code);
    expect(codes.filter((code) => code.startsWith('STIMULUS_FILE_MISSING'))).toHaveLength(2);
  }, 90_000);

  it.each([
    ['CRLF', { tsv: good.tsv.replaceAll('\n', '\r\n') }],
    ['BOM', { tsv: `\uFEFF${good.tsv}` }],
    ['DURATION', { tsv: good.tsv.replace('1.000', '-1.000') }],
    ['NOT_SORTED', { tsv: good.tsv.replace('40.250', '0.250') }],
    ['DECIMALS', { tsv: good.tsv.replace('0.500', '0.5') }],
    ['DESCRIBED_ABSENT', { sidecar: good.sidecar.replace('{', '{"ghost": {"Description": "none"},') }],
    ['NOT_DESCRIBED', { sidecar: '{}' }]
  ])('find %s by our own check', (code, change) => {
    expect(ownFindings(good)).toEqual([]);
    expect(ownFindings({ ...good, ...change }).map((one) => one.code)).toContain(code);
  });

  it('read HED strings', async () => {
    expect(await hedFindings('Sensory-event, (Red, Blue)')).toEqual([]);
    expect(await hedFindings('Sensory-event, No-such-tag')).toHaveLength(1);
  }, 90_000);
});
