/** A tone heard in the editor: the same sine, level, ear and ramps that the card asks for. */
import type { SoundItem } from './stages';

/** Amplitude of a level in dB full scale. */
export const amplitude = (level: number): number => 10 ** (level / 20);

/** Points (seconds, gain) of rise, hold and fall; ramps longer than half the tone are shortened to it. */
export function envelope(duration: number, ramp: number, gain: number): [number, number][] {
  const rise = Math.min(ramp, duration / 2);
  return [
    [0, 0],
    [rise, gain],
    [duration - rise, gain],
    [duration, 0]
  ];
}

let context: AudioContext | undefined;

/** Plays at `after` seconds from now; returns a function that silences it. `loudest` is the profile's limit, dB. */
export function playTone(item: SoundItem, loudest: number, after = 0): () => void {
  context ??= new AudioContext();
  void context.resume();
  const start = context.currentTime + 0.02 + after;
  const duration = Math.max(item.duration / 1e6, 0.01);
  const oscillator = new OscillatorNode(context, { frequency: item.frequency });
  const gain = new GainNode(context, { gain: 0 });
  const pan = new StereoPannerNode(context, { pan: { both: 0, left: -1, right: 1 }[item.ear] });
  const points = envelope(
    duration,
    Math.max(item.ramp / 1e6, 0.002),
    amplitude(Math.min(item.level, loudest))
  );
  for (const [at, value] of points) gain.gain.linearRampToValueAtTime(value, start + at);
  oscillator.connect(gain).connect(pan).connect(context.destination);
  oscillator.start(start);
  oscillator.stop(start + duration + 0.05);
  return () => oscillator.stop();
}
