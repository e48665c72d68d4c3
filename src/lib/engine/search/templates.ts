import { addEvent } from '../convolution/event';
import { prepareSetting, type Setting } from '../design/setting';
import { dot } from '../linalg/vector';
import type { Seconds } from '../units';
import type { Part, SearchProblem } from './problem';

/**
 * What one modelled event contributes, for every grid position it can take: z = W·(response), whitened, stored over
 * the few volumes where it is not 0, and w = Qᵀz, its coordinates on the whitened nuisance. Then the information that
 * two events share is z·z′ − w·w′, with no projection matrix.
 */
export interface Template {
  /** Volumes from `from[g]` to before `to[g]` hold a value. */
  readonly from: Int32Array;
  readonly to: Int32Array;
  /** Row g begins at g · stride. */
  readonly values: Float64Array;
  readonly stride: number;
  /** Row g begins at g · rank. */
  readonly nuisance: Float64Array;
  /** z·z − w·w of each position. */
  readonly self: Float64Array;
}

export interface Templates {
  readonly setting: Setting;
  readonly volumes: number;
  /** Number of nuisance directions. */
  readonly rank: number;
  readonly templates: readonly Template[];
  /** Per trial kind: which template adds to which column. */
  readonly kinds: readonly (readonly { readonly template: number; readonly column: number }[])[];
}

/** Computes the templates of every distinct modelled event at `positions` grid steps from time 0. */
export function makeTemplates(
  problem: SearchProblem,
  parts: readonly (readonly Part[])[],
  positions: number
): Templates {
  const { rules, times, highPass, noise } = problem;
  const setting = prepareSetting({ tr: rules.tr, times, highPass, noise });
  const templates: Template[] = [];
  const known = new Map<string, number>();
  const kinds = parts.map((list) =>
    list.map((part) => {
      const key = `${part.offset}/${part.duration}`;
      const index = known.get(key) ?? templates.push(makeTemplate(problem, part, setting, positions)) - 1;
      known.set(key, index);
      return { template: index, column: part.column };
    })
  );
  return { setting, volumes: setting.base.volumes, rank: setting.whitened.q.length, templates, kinds };
}

function makeTemplate(problem: SearchProblem, part: Part, setting: Setting, positions: number): Template {
  const { response, times, rules } = problem;
  const volumes = setting.base.volumes;
  const q = setting.whitened.q;
  const from = new Int32Array(positions);
  const to = new Int32Array(positions);
  const rows: Float64Array[] = [];
  const nuisance = new Float64Array(positions * q.length);
  const self = new Float64Array(positions);
  const column = new Float64Array(volumes);
  for (let g = 0; g < positions; g++) {
    const onset: Seconds = g * rules.grid + part.offset;
    column.fill(0);
    addEvent(column, times, response, { onset, duration: part.duration }, part.scale);
    const z = setting.whitener.apply(column);
    let start = 0;
    let end = volumes;
    while (start < end && z[start] === 0) start++;
    while (end > start && z[end - 1] === 0) end--;
    from[g] = start;
    to[g] = end;
    rows.push(z.slice(start, end));
    let lost = 0;
    for (let k = 0; k < q.length; k++) {
      const direction = q[k]!;
      let share = 0;
      for (let n = start; n < end; n++) share += direction[n]! * z[n]!;
      nuisance[g * q.length + k] = share;
      lost += share * share;
    }
    self[g] = dot(z, z) - lost;
  }
  const stride = rows.reduce((most, row) => Math.max(most, row.length), 0);
  const values = new Float64Array(positions * stride);
  rows.forEach((row, g) => values.set(row, g * stride));
  return { from, to, values, stride, nuisance, self };
}
