/**
 * `index.html`: one page that runs from disk. The payload is data, the player one inline classic script named by its
 * hash in the policy; there is no `unsafe-…` and nothing may be requested. Only where large stimuli stand beside the
 * page may scripts be loaded from files (`file:`), and the player checks each against its hash before use.
 */
import { sha256Hex } from '$lib/task/canonical';
import type { PlayerPayload } from '$lib/player/payload';
import { sha256Source } from './base64';
import { escapeHtml, jsonForHtml, scriptForHtml } from './escape';
import type { BundleTexts } from './texts';

/** Seen only until the player takes the page over, or if it never does. */
const WAITING_STYLE = `
html{background:#0c1214;color:#dfe7e4;font:1.2rem/1.5 "Atkinson Hyperlegible",Verdana,sans-serif}
body{margin:0}
.ebbline-waiting{max-width:34rem;margin:20vh auto 0;padding:0 1.5rem}
.ebbline-mark{margin:0;padding:.4rem 1rem;background:#f0916a;color:#0c1214;font-weight:700}
`;

/** The policy as it stands in the page, for the given texts of style and script. */
export function policyFor(styles: string[], script: string, hasLargeStimuli: boolean): string {
  const hash = (text: string) => sha256Source(sha256Hex(text));
  return [
    `default-src 'none'`,
    `script-src ${hash(script)}${hasLargeStimuli ? ' file:' : ''}`,
    `style-src ${styles.map(hash).join(' ')}`,
    'img-src data: blob:',
    'media-src data: blob:',
    `base-uri 'none'`,
    `form-action 'none'`
  ].join('; ');
}

export function bundlePage(
  payload: PlayerPayload,
  player: { script: string; css: string },
  texts: BundleTexts
): string {
  const script = scriptForHtml(player.script);
  const styles = [WAITING_STYLE, player.css.replace(/<\/(style)/gi, '<\\/$1')].filter(Boolean);
  const mark = texts.mark(payload.kind);
  const hasLargeStimuli = Object.values(payload.assets).some((asset) => 'script' in asset);
  const data = jsonForHtml(payload);
  const title = [payload.document.brief.title, mark].filter(Boolean).join(' · ');
  return [
    '<!doctype html>',
    `<html lang="${escapeHtml(texts.lang)}">`,
    '<head>',
    '<meta charset="utf-8">',
    `<meta http-equiv="Content-Security-Policy" content="${policyFor(styles, script, hasLargeStimuli)}">`,
    '<meta name="viewport" content="width=device-width, initial-scale=1">',
    // Without it the browser would ask for a favicon beside the page.
    '<link rel="icon" href="data:,">',
    `<title>${escapeHtml(title)}</title>`,
    ...styles.map((style) => `<style>${style}</style>`),
    '</head>',
    '<body>',
    '<div id="root">',
    mark ? `<p class="ebbline-mark">${escapeHtml(mark)}</p>` : '',
    `<p class="ebbline-waiting">${escapeHtml(texts.notStarted)}</p>`,
    `<noscript><p class="ebbline-waiting">${escapeHtml(texts.noScript)}</p></noscript>`,
    '</div>',
    // The policy names scripts only; the payload's own hash lets the player notice a copy that was damaged.
    `<script type="application/json" id="payload" data-sha256="${sha256Hex(data)}">${data}</script>`,
    `<script>${script}</script>`,
    '</body>',
    '</html>',
    ''
  ].join('\n');
}
