import type { ResponseName } from '$lib/task/schema';
import { fingerWords } from '../forms/fingers';

export interface Segment {
  text: string;
  kind: 'plain' | 'filled' | 'unknown';
}

/**
 * Instructions cut into plain stretches and `{response name}` places. A place that names a response is filled
 * with its finger, as the player fills it; one that names none stays as typed and is marked, so that no participant reads a brace.
 */
export function fillInstructions(text: string, responses: readonly ResponseName[]): Segment[] {
  const segments: Segment[] = [];
  let from = 0;
  for (const match of text.matchAll(/\{([^{}]+)\}/g)) {
    if (match.index > from) segments.push({ text: text.slice(from, match.index), kind: 'plain' });
    const named = responses.find((r) => r.name.toLowerCase() === match[1]?.trim().toLowerCase());
    segments.push(
      named ? { text: fingerWords(named.finger), kind: 'filled' } : { text: match[0], kind: 'unknown' }
    );
    from = match.index + match[0].length;
  }
  if (from < text.length) segments.push({ text: text.slice(from), kind: 'plain' });
  return segments;
}

/** One sentence on places that name no response, or null when all are filled. */
export function unknownPlaces(
  segments: readonly Segment[],
  responses: readonly ResponseName[]
): string | null {
  const unknown = [...new Set(segments.filter((s) => s.kind === 'unknown').map((s) => s.text))];
  if (unknown.length === 0) return null;
  const known = responses.map((r) => `{${r.name}}`).join(', ');
  const way = known ? `The responses are ${known}.` : 'No response is named yet; add one below.';
  return `${unknown.join(', ')} ${unknown.length === 1 ? 'names' : 'name'} no response. ${way}`;
}
