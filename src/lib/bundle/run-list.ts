/** `run-list.html`: the planned participants and runs with places to tick and write; blank lines without a plan. */
import { escapeHtml } from './escape';
import { paper } from './paper';
import type { BundleTexts } from './texts';
import type { PackInput } from './types';

/** Lines to fill in by hand for each run of a task that has no plan. */
const BLANK_PARTICIPANTS = 6;

export function runList(input: PackInput, texts: BundleTexts): string {
  const { labels } = texts;
  const names = new Map(input.document.runs.map((run) => [run.id, run.name]));
  const planned = (input.plan ?? []).flatMap((row) =>
    row.runs.map((run, place) => [
      `sub-${row.participant}`,
      row.session === null ? '' : `ses-${row.session}`,
      `${place + 1}: ${names.get(run) ?? run}`
    ])
  );
  const blank = Array.from({ length: BLANK_PARTICIPANTS }, () =>
    input.document.runs.map((run, place) => ['sub-', '', `${place + 1}: ${run.name}`])
  ).flat();
  const columns = [
    labels.participant,
    labels.session,
    labels.run,
    labels.attempt,
    labels.start,
    labels.operator,
    labels.saved,
    labels.remarks
  ];
  const head = columns.map((name) => `<th scope="col">${escapeHtml(name)}</th>`).join('');
  const lines = (planned.length ? planned : blank).map((cells) => {
    const written = cells.map((text) => `<td dir="auto">${escapeHtml(text)}</td>`).join('');
    return `<tr>${written}<td></td><td></td><td></td><td>☐</td><td></td></tr>`;
  });
  const table = `<table><thead><tr>${head}</tr></thead><tbody>\n${lines.join('\n')}\n</tbody></table>`;
  return paper(input, texts, texts.runList, `<p>${escapeHtml(texts.runListHelp)}</p>\n${table}`);
}
