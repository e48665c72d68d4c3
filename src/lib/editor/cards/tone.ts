/** A tone heard in the editor: the same samples that the player plays. */
import { renderTone } from '$lib/player/tone';
import type { SoundItem } from './stages';

let context: AudioContext | undefined;

/** Plays at `after` seconds from now; returns a function that silences it. `loudest` is the profile's limit, dB FS. */
export function playTone(item: SoundItem, loudest: number, after = 0): () => void {
  context ??= new AudioContext();
  void context.resume();
  const { sampleRate } = context;
  const samples = renderTone(item, Math.max(item.duration / 1e6, 0.01), loudest, sampleRate);
  const buffer = new AudioBuffer({ length: Math.max(1, samples.length), numberOfChannels: 2, sampleRate });
  if (item.ear !== 'right') buffer.copyToChannel(samples, 0);
  if (item.ear !== 'left') buffer.copyToChannel(samples, 1);
  const source = new AudioBufferSourceNode(context, { buffer });
  source.connect(context.destination);
  source.start(context.currentTime + 0.02 + after);
  return () => source.stop();
}
