/** Names with quotes, tabs, emoji, right-to-left text and `</script>`: nothing breaks out, every file name is plain. */
import { describe, expect, it } from 'vitest';
import { stimulusName, uniqueName } from '../../../src/lib/bundle/names';
import { packBundle } from '../../../src/lib/bundle/pack';
import { readPayload } from '../../../src/lib/player/payload';
import { ownFindings } from '../../e2e/support/bids';
import { sampleInput } from '../../fixtures/sample-bundle';
import { textOf, unzip } from './unzip';

const NAMES = [
  `</script><script>window.broken=1</script>`,
  `"quotes" 'and' \`ticks\``,
  `tab\there\nand line`,
  `🦀 כלנית \u202Eabc`,
  `../../etc/passwd`,
  `CON`,
  `<img src=x onerror=broken()>`,
  `$& $1 \${x}`
];

describe.each(NAMES)('a task named %j', (name) => {
  const input = sampleInput(
    'void 0',
    { title: name, pictureName: `${name}.png`, conditionNames: [name, `${name}!`] },
    { lab: name, study: { label: 'tide', name } }
  );

  it('is packed whole, under plain file names, with nothing broken out', async () => {
    const files = await unzip(await packBundle(input));
    const paths = Object.keys(files);
    for (const path of paths) expect(path).toMatch(/^([a-z]+\/){0,2}[A-Za-z0-9][A-Za-z0-9._-]*$/);
    expect(new Set(paths.map((path) => path.toLowerCase())).size).toBe(paths.length);
    expect(paths.filter((path) => path.startsWith('events/conditions/'))).toHaveLength(2);
    expect(paths.filter((path) => path.startsWith('stimuli/'))).toHaveLength(1);

    const page = textOf(files, 'index.html');
    expect(page.match(/<script/g)).toHaveLength(2);
    expect(page.match(/<\/script/g)).toHaveLength(2);
    expect(page).not.toContain('<img');
    const json = /id="payload" data-sha256="[0-9a-f]{64}">(.*?)<\/script>/s.exec(page)![1]!;
    const read = readPayload(JSON.parse(json));
    expect(read.ok && read.payload.document.brief.title).toBe(name);
    for (const path of ['console-card.html', 'run-list.html']) {
      expect(textOf(files, path)).not.toMatch(/<script|<img/);
    }

    const stem = 'events/task-chimelantern_run-1_events';
    const tsv = textOf(files, `${stem}.tsv`);
    const sidecar = textOf(files, `${stem}.json`);
    expect(ownFindings({ stem, tsv, sidecar })).toEqual([]);
    const stimulus = paths.find((path) => path.startsWith('stimuli/'))!.slice('stimuli/'.length);
    expect(tsv).toContain(`\t${stimulus}\t`);
  });
});

describe('file names', () => {
  it('take the ending of the real type and never come out empty', () => {
    expect(stimulusName('photo.exe', 'image/png', 'a'.repeat(64))).toBe('photo.png');
    expect(stimulusName('🦀.png', 'image/png', 'a'.repeat(64))).toBe('stimulus-aaaaaaaa.png');
    expect(stimulusName('Hafenlicht über.JPG', 'image/jpeg', '')).toBe('Hafenlicht-uber.jpg');
    expect(stimulusName('nul.png', 'image/png', '')).toBe('file-nul.png');
  });

  it('stay apart on systems that do not tell case', () => {
    const taken = new Set<string>();
    expect([uniqueName('A.png', taken), uniqueName('a.png', taken), uniqueName('a.PNG', taken)]).toEqual([
      'A.png',
      'a-2.png',
      'a-3.PNG'
    ]);
  });
});
