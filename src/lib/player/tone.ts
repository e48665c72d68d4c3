/** Samples of a sound item: a sine with raised-cosine ends, at its level in dB full scale but never above a cap. */
import type { Item } from '$lib/task/schema';
import { toSeconds } from '$lib/task/time';

/** No sound begins without a ramp, seconds. */
const SHORTEST_RAMP = 0.002;

/**
 * Mono samples in −1 … 1 at `rate` Hz. `cap`: loudest level allowed, dB full scale. The ramp is at most half of the
 * sound, so a short one still begins and ends in silence.
 */
export function renderTone(
  item: Extract<Item, { kind: 'sound' }>,
  duration: number,
  cap: number,
  rate: number
): Float32Array<ArrayBuffer> {
  const count = Math.max(1, Math.round(duration * rate));
  const ramp = Math.min(count / 2, Math.max(SHORTEST_RAMP, toSeconds(item.ramp)) * rate);
  const amplitude = 10 ** (Math.min(item.level, cap) / 20);
  const samples = new Float32Array(count);
  for (let i = 0; i < count; i++) {
    const fromEnd = Math.min(i, count - 1 - i);
    const gate = fromEnd >= ramp ? 1 : 0.5 - 0.5 * Math.cos((Math.PI * fromEnd) / ramp);
    samples[i] = amplitude * gate * Math.sin((2 * Math.PI * item.frequency * i) / rate);
  }
  return samples;
}
