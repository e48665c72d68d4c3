/**
 * Sounds on the audio clock. Every tone is rendered before the run and started ahead of its time; page time is mapped
 * to audio time through `getOutputTimestamp()`, which tells what is leaving the computer now, so that the output's
 * latency is in it. The profile's measured sound delay is what remains beyond.
 */
import type { Profile } from '$lib/task/profile';
import type { Item } from '$lib/task/schema';
import type { ScheduledItem } from '../schedule';
import { renderTone } from '../tone';

type Sound = Extract<Item, { kind: 'sound' }>;

export class Speaker {
  readonly #context: AudioContext;
  readonly #delay: number;
  readonly #cap: number;
  readonly #buffers = new Map<string, AudioBuffer>();
  readonly #playing = new Set<AudioBufferSourceNode>();

  /** To be made and woken in answer to a press of a key or button: browsers keep silent otherwise. */
  constructor(profile: Profile) {
    this.#context = new AudioContext({ latencyHint: 'interactive' });
    this.#delay = profile.soundDelay.seconds;
    this.#cap = profile.soundLevel;
  }

  async wake(): Promise<boolean> {
    // A browser that wants another press first leaves the promise open: not waited for beyond half a second.
    const patience = new Promise((done) => setTimeout(done, 500));
    if (this.#context.state !== 'running') await Promise.race([this.#context.resume(), patience]);
    return this.#context.state === 'running';
  }
  close(): void {
    void this.#context.close();
  }

  /** Renders every different sound among `items`. */
  prepare(items: readonly ScheduledItem[]): void {
    for (const { item, onset, end } of items) if (item.kind === 'sound') this.#bufferOf(item, end - onset);
  }

  /** Begins a sound so that it is heard at page time `at`, seconds; answers when it will be, or null for never. */
  play(scheduled: ScheduledItem, at: number): number | null {
    if (scheduled.item.kind !== 'sound' || this.#context.state !== 'running') return null;
    const buffer = this.#bufferOf(scheduled.item, scheduled.end - scheduled.onset);
    return this.#start(buffer, at);
  }

  /** A tone of one second for the self-check, at the loudest level allowed. */
  test(item: Sound): void {
    this.#start(this.#bufferOf(item, 1), performance.now() / 1000 + 0.05);
  }

  silence(): void {
    for (const source of this.#playing) source.stop();
    this.#playing.clear();
  }

  #start(buffer: AudioBuffer, at: number): number {
    const source = new AudioBufferSourceNode(this.#context, { buffer });
    source.connect(this.#context.destination);
    const offset = this.#pageMinusAudio();
    // Already past: as soon as the audio clock can, and said so by the time given back.
    const when = Math.max(this.#context.currentTime, at - this.#delay - offset);
    source.start(when);
    this.#playing.add(source);
    source.addEventListener('ended', () => this.#playing.delete(source));
    return when + offset + this.#delay;
  }

  /** Seconds to add to audio time to get the page time at which it leaves the computer. */
  #pageMinusAudio(): number {
    const { contextTime, performanceTime } = this.#context.getOutputTimestamp();
    if (contextTime !== undefined && performanceTime !== undefined && contextTime > 0)
      return performanceTime / 1000 - contextTime;
    const latency = this.#context.outputLatency || this.#context.baseLatency || 0;
    return performance.now() / 1000 - this.#context.currentTime + latency;
  }

  #bufferOf(item: Sound, duration: number): AudioBuffer {
    const key = [item.frequency, item.level, item.ear, item.ramp, duration].join(' ');
    const known = this.#buffers.get(key);
    if (known) return known;
    const { sampleRate } = this.#context;
    const samples = renderTone(item, duration, this.#cap, sampleRate);
    const buffer = new AudioBuffer({ length: samples.length, numberOfChannels: 2, sampleRate });
    if (item.ear !== 'right') buffer.copyToChannel(samples, 0);
    if (item.ear !== 'left') buffer.copyToChannel(samples, 1);
    this.#buffers.set(key, buffer);
    return buffer;
  }
}
