/** `console-card.html`: what the operator types at the scanner's console, run by run, large enough to read aloud. */
import { toSeconds } from '$lib/task/time';
import { escapeHtml } from './escape';
import { paper } from './paper';
import { keyInWords, scanFacts } from './scan-facts';
import type { BundleTexts } from './texts';
import type { PackInput } from './types';

export function consoleCard(input: PackInput, texts: BundleTexts): string {
  const { document, profile } = input;
  const { labels } = texts;
  const cards = document.runs.map((run, place) => {
    const facts = scanFacts(document, run, profile);
    const main: [name: string, value: string, note: string | null][] = [
      [labels.volumesToType, String(facts.volumesToType), texts.dummiesNote(facts)],
      [labels.tr, `${facts.tr} s`, null],
      [labels.total, facts.total, null]
    ];
    const rows: [name: string, value: string][] = [
      [labels.storedVolumes, String(facts.storedVolumes)],
      [labels.dummiesWithPulses, String(facts.dummiesWithPulses)],
      [labels.silentDummies, texts.silentDummies(facts.silentDummies)],
      [labels.pulses, `${texts.pulseSetting(profile)}. ${texts.zero(facts)}`],
      [labels.triggerKey, `${keyInWords(profile.triggerKey)}, code ${profile.triggerKey}`]
    ];
    const head = (name: string) => `<th scope="row">${escapeHtml(name)}</th>`;
    const lines = [
      ...main.map(([name, value, note]) => {
        const small = note === null ? '' : `<small>${escapeHtml(note)}</small>`;
        return `<tr class="main">${head(name)}<td>${escapeHtml(value)}${small}</td></tr>`;
      }),
      ...rows.map(([name, value]) => `<tr>${head(name)}<td>${escapeHtml(value)}</td></tr>`)
    ];
    const heading = `${labels.run} ${place + 1}: <bdi>${escapeHtml(run.name)}</bdi>`;
    return `<section class="card"><h2>${heading}</h2><table>${lines.join('\n')}</table></section>`;
  });
  const differs = Math.abs(profile.tr - toSeconds(document.brief.tr)) > 1e-9;
  const warning = differs ? `<p class="warn">${escapeHtml(texts.otherTr(profile.tr))}</p>` : '';
  const cautions = texts.cautions.map((caution) => `<li>${escapeHtml(caution)}</li>`);
  const body = `<p>${escapeHtml(texts.typeAtConsole)}:</p>\n${warning}${cards.join('\n')}\n<ul>${cautions.join('')}</ul>`;
  return paper(input, texts, texts.consoleCard, body);
}
