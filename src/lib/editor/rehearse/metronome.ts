/** A soft beat with each pulse of the simulated scanner. The synthesiser is fetched only when it is switched on. */
export interface Metronome {
  beat(): void;
  stop(): void;
}

/** Call in answer to a press, or browsers keep silent. */
export async function makeMetronome(): Promise<Metronome> {
  const tone = await import('tone');
  await tone.start();
  const synth = new tone.MembraneSynth({
    volume: -26,
    octaves: 2,
    pitchDecay: 0.02,
    envelope: { attack: 0.002, decay: 0.08, sustain: 0, release: 0.05 }
  }).toDestination();
  return {
    beat: () => void synth.triggerAttackRelease('C2', 0.06),
    stop: () => void synth.dispose()
  };
}
