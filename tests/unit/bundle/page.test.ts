import { createHash } from 'node:crypto';
import { Script } from 'node:vm';
import { describe, expect, it } from 'vitest';
import playerCode from '../../../src/lib/player/standalone.ts?bundle=iife';
import { toBase64 } from '../../../src/lib/bundle/base64';
import { jsonForHtml, scriptForHtml } from '../../../src/lib/bundle/escape';
import { bundleFiles } from '../../../src/lib/bundle/pack';
import { sampleInput } from '../../fixtures/sample-bundle';
import { textOf } from './unzip';

const source = (text: string) => `'sha256-${createHash('sha256').update(text).digest('base64')}'`;
const policyOf = (page: string) => /http-equiv="Content-Security-Policy" content="([^"]+)"/.exec(page)![1]!;
const scriptsOf = (page: string) => [...page.matchAll(/<script>(.*?)<\/script>/gs)].map((match) => match[1]!);
const stylesOf = (page: string) => [...page.matchAll(/<style>(.*?)<\/style>/gs)].map((match) => match[1]!);

describe('the page that runs from disk', () => {
  const player = `const end = '</script><!--'; document.title = end;`;
  const css = 'p { color: red }';
  const files = bundleFiles(sampleInput(player, {}, { playerCss: css }));
  const page = textOf(files, 'index.html');

  it('has one inline script, named by its hash, and nothing unsafe', () => {
    expect(scriptsOf(page)).toHaveLength(1);
    const policy = policyOf(page);
    expect(policy).toContain(`script-src ${source(scriptsOf(page)[0]!)};`);
    for (const style of stylesOf(page)) expect(policy).toContain(source(style));
    expect(stylesOf(page)).toContain(css);
    expect(policy).toMatch(/^default-src 'none';/);
    expect(policy).not.toMatch(/unsafe|https?:|\*|file:/);
    expect(policy).toContain('img-src data: blob:;');
    expect(policy).toContain('media-src data: blob:;');
  });

  it('names no address to fetch from', () => {
    expect(page).not.toMatch(/\b(src|href)="(?!data:)/);
  });

  it('keeps a script whole whose strings end scripts and start comments', () => {
    const escaped = scriptsOf(page)[0]!;
    const document = { title: '' };
    new Script(escaped).runInNewContext({ document });
    expect(document.title).toBe('</script><!--');
  });

  it('says PROOF or PRACTICE on every screen and paper', () => {
    const practice = bundleFiles(sampleInput(player, {}, { kind: 'PRACTICE' }));
    for (const path of ['index.html', 'console-card.html', 'run-list.html', 'README.txt', 'methods.txt']) {
      expect(textOf(files, path), path).toContain('PROOF, not for collection');
      expect(textOf(practice, path), path).toContain('PRACTICE, outside the scanner');
    }
  });

  it('has papers with a policy that lets nothing run', () => {
    for (const path of ['console-card.html', 'run-list.html']) {
      const paper = textOf(files, path);
      expect(policyOf(paper)).toContain(`default-src 'none'; style-src ${source(stylesOf(paper)[0]!)};`);
      expect(scriptsOf(paper)).toEqual([]);
    }
  });
});

describe('escaping', () => {
  it('leaves no < in inline JSON and gives the same value back', () => {
    const value = { name: '</script><!-- <script> \u2028 \u2029 & "' };
    const text = jsonForHtml(value);
    expect(text).not.toMatch(/[<\u2028\u2029]/);
    expect(JSON.parse(text)).toEqual(value);
  });

  it('leaves the real player a script that parses and ends nowhere early', () => {
    const escaped = scriptForHtml(playerCode);
    expect(escaped).not.toMatch(/<\/script|<!--/i);
    expect(() => new Script(escaped)).not.toThrow();
  });

  it('escapes script ends whatever their case', () => {
    expect(scriptForHtml('"</SCRIPT >"')).toBe('"<\\/SCRIPT >"');
  });

  it.each([0, 1, 2, 3, 4, 255])('writes %i bytes in base64 as Node does', (length) => {
    const bytes = Uint8Array.from({ length }, (_, index) => (index * 37) & 255);
    expect(toBase64(bytes)).toBe(Buffer.from(bytes).toString('base64'));
  });
});
