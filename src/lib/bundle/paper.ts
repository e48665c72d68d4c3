/** The sheet that both printed papers share: the bundle's kind on every page, what it is, and a strict policy. */
import { sha256Hex } from '$lib/task/canonical';
import { sha256Source } from './base64';
import { escapeHtml } from './escape';
import type { BundleTexts } from './texts';
import type { PackInput } from './types';

const STYLE = `
*{box-sizing:border-box}
body{margin:0 auto;padding:2.2rem 1.5rem;max-width:60rem;background:#fbfaf5;color:#16211f;
font:1rem/1.45 "Atkinson Hyperlegible",Verdana,sans-serif;font-variant-numeric:tabular-nums}
h1{font-size:1.7rem;margin:.2rem 0 .6rem}h2{font-size:1.25rem;margin:1.6rem 0 .4rem}
.mark{border:3px solid #9c3a12;color:#9c3a12;font-weight:700;padding:.35rem .8rem;font-size:1.1rem;background:#fbfaf5}
dl.of{display:grid;grid-template-columns:max-content 1fr;gap:.1rem 1rem;margin:.6rem 0;font-size:.9rem}
dt{color:#52615e}dd{margin:0;overflow-wrap:anywhere}
table{border-collapse:collapse;width:100%}
th,td{border:1px solid #9aa6a2;padding:.4rem .6rem;text-align:left;vertical-align:top;overflow-wrap:anywhere}
thead{display:table-header-group}thead th{font-size:.85rem;color:#52615e}
tr{break-inside:avoid}
.card{break-inside:avoid}
.card th{width:17rem;font-weight:400}
.card .main th,.card .main td{font-size:1.5rem;font-weight:700}
thead th{overflow-wrap:normal}
td small{font-weight:400;font-size:1rem;display:block}
.warn{border-left:.4rem solid #9c3a12;padding-left:.7rem}
ul{padding-left:1.2rem}
@media print{body{padding:1.6cm 0 0;background:none;max-width:none}.mark{position:fixed;top:0;left:0;right:0;background:#fff}}
`;

/** A whole HTML page; `body` is markup that is safe already. */
export function paper(input: PackInput, texts: BundleTexts, heading: string, body: string): string {
  const { labels } = texts;
  const mark = texts.mark(input.kind);
  const facts: [string, string][] = [
    [labels.task, `${input.document.brief.title} (task-${input.document.brief.label})`],
    [labels.study, `${input.study.name} (${input.study.label})`],
    [labels.lab, input.lab],
    [labels.revision, input.revision.slice(0, 16)],
    [labels.profile, `${input.profile.name} (${input.profileHash.slice(0, 16)})`],
    [labels.madeAt, input.madeAt]
  ];
  const of = facts.map(
    ([name, value]) => `<dt>${escapeHtml(name)}</dt><dd dir="auto">${escapeHtml(value)}</dd>`
  );
  const policy = `default-src 'none'; style-src ${sha256Source(sha256Hex(STYLE))}; base-uri 'none'; form-action 'none'`;
  return `<!doctype html>
<html lang="${escapeHtml(texts.lang)}">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${policy}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escapeHtml([heading, input.document.brief.title, mark].filter(Boolean).join(' · '))}</title>
<style>${STYLE}</style>
</head>
<body>
${mark ? `<p class="mark">${escapeHtml(mark)}</p>` : ''}
<h1>${escapeHtml(heading)}</h1>
<dl class="of">${of.join('')}</dl>
${body}
</body>
</html>
`;
}
