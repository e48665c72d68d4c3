import type { DesignEvent } from '../convolution/event';
import { EngineError, requirePositive } from '../errors';
import type { Response } from '../response/response';
import type { Seconds } from '../units';
import { detectionColumns } from './columns';
import { requireContrast, type Contrast } from './contrast';
import { designReport } from './report';
import type { SettingInput } from './setting';

/** A run and the response to expect in it. */
export interface BlockSetting extends SettingInput {
  /** When each volume is modelled; the regressors are read here. */
  modelledAt: ArrayLike<Seconds>;
  response: Response;
}

/**
 * Blocks of `length` seconds, one condition after another and round again until the run ends; with `hasRest` a rest
 * of the same length closes each round. The last block may reach beyond the run.
 * @returns events of each condition
 */
export function alternatingBlocks(
  conditions: number,
  length: Seconds,
  end: Seconds,
  hasRest: boolean
): DesignEvent[][] {
  requirePositive('block length', length, 'Use 16 s.');
  const round = conditions + (hasRest ? 1 : 0);
  const events: DesignEvent[][] = Array.from({ length: conditions }, () => []);
  for (let slot = 0; slot * length < end; slot += 1)
    events[slot % round]?.push({ onset: slot * length, duration: length });
  return events;
}

/**
 * Efficiency a contrast would have in a plain block design of the same run: the conditions it weighs take turns in
 * blocks (16 s by default), with a rest in each round unless the weights sum to 0. Same response, drift and noise, and
 * the same scale: one isolated block has peak 1.
 *
 * Conditions of weight 0 are left out. Errors: `EngineError` for a contrast without weights.
 */
export function blockEfficiency(
  weights: readonly number[],
  setting: BlockSetting,
  length: Seconds = 16
): number {
  const used = weights.filter((weight) => weight !== 0);
  if (used.length === 0)
    throw new EngineError('contrast', 'all 0', 'at least one weight', 'Weigh a condition.');
  const sum = used.reduce((total, weight) => total + weight, 0);
  const hasRest = Math.abs(sum) > 1e-9 * Math.max(...used.map(Math.abs)) || used.length === 1;
  const end = setting.modelledAt[setting.modelledAt.length - 1]!;
  const blocks = alternatingBlocks(used.length, length, end, hasRest);
  const columns = detectionColumns(
    blocks.map((events, j) => ({ name: `block ${j + 1}`, events, trialDuration: length })),
    setting.response,
    setting.modelledAt
  );
  const contrasts = [{ name: 'reference', weights: used }];
  return designReport({ ...setting, columns, contrasts }).contrasts[0]!.efficiency;
}

/**
 * Efficiency of a contrast relative to the 16 s block design of the same length: 1 means as good as blocks. Standard
 * errors compare as its square root. 0 where the contrast is not estimable, or where the run is too short for a block
 * reference to be.
 */
export function relativeEfficiency(
  contrast: Contrast,
  efficiency: number,
  setting: BlockSetting,
  length: Seconds = 16
): number {
  requireContrast(contrast, contrast.weights.length);
  if (!(efficiency > 0)) return 0;
  const reference = blockEfficiency(contrast.weights, setting, length);
  return reference > 0 ? efficiency / reference : 0;
}

/**
 * Efficiency of one condition in blocks of each length, on and off in turn from time 0, and the best of them.
 *
 * Efficiencies are comparable across lengths when every block drives the signal equally: `scale` is the same for all
 * (the response's own peak), not each block's.
 * @param lengths candidate block lengths in seconds
 */
export function bestBlockLength(
  lengths: readonly Seconds[],
  setting: BlockSetting
): { length: Seconds; efficiencies: { length: Seconds; efficiency: number }[] } {
  if (lengths.length === 0)
    throw new EngineError('list of block lengths', lengths, 'at least one length', 'Try 4, 6 … 40 s.');
  const end = setting.modelledAt[setting.modelledAt.length - 1]!;
  const efficiencies = lengths.map((length) => {
    const events = alternatingBlocks(1, length, end, true)[0]!;
    const columns = detectionColumns([{ name: 'blocks', events }], setting.response, setting.modelledAt);
    const contrasts = [{ name: 'blocks', weights: [1] }];
    return { length, efficiency: designReport({ ...setting, columns, contrasts }).contrasts[0]!.efficiency };
  });
  const best = efficiencies.reduce((a, b) => (b.efficiency > a.efficiency ? b : a));
  return { length: best.length, efficiencies };
}
