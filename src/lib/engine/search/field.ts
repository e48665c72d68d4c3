import type { Template, Templates } from './templates';

/**
 * The sums that score a candidate without its design matrix, kept up to date move by move.
 *
 * For every column j: s_j = Σ z over its events (one number per volume) and a_j = Σ w (one per nuisance direction);
 * M_ij = s_i·s_j − a_i·a_j. A change of a few events e with signs gives
 * M + Σ (R_e's share in rows and columns) + Σ G(e, e′), where R_e[j] = z_e·s_j − w_e·a_j needs only the volumes that
 * the event reaches. No convolution, no whitening and no projection happens during a search.
 * Source: search kernel re-derived from the sums of generalised least squares; checked against a rebuilt design.
 */
export class Field {
  readonly columns: number;
  /** M, row by row. */
  readonly information: Float64Array;
  /** M of the candidate last looked at by `tryChanges` or `measure`. */
  readonly candidate: Float64Array;
  private readonly sums: Float64Array[];
  private readonly shares: Float64Array[];
  /** The sums before the move under way: equal to them except between volumes `low` and `high` during one. */
  private readonly keptSums: Float64Array[];
  private readonly keptShares: Float64Array[];
  private low = 0;
  private high = 0;

  // Distinct (template, position) pairs among the changes under way, and each one's signs by column.
  private readonly spotTemplate: number[] = [];
  private readonly spotPlace: number[] = [];
  private readonly spotSigns: Float64Array[] = [];
  private readonly spotField: Float64Array[] = [];
  private spots = 0;

  constructor(
    private readonly templates: Templates,
    columns: number
  ) {
    this.columns = columns;
    this.information = new Float64Array(columns * columns);
    this.candidate = new Float64Array(columns * columns);
    const blank = (length: number) => Array.from({ length: columns }, () => new Float64Array(length));
    this.sums = blank(templates.volumes);
    this.shares = blank(templates.rank);
    this.keptSums = blank(templates.volumes);
    this.keptShares = blank(templates.rank);
  }

  /** Forgets everything and adds these trials: also what keeps rounding from piling up over millions of moves. */
  rebuild(order: ArrayLike<number>, places: ArrayLike<number>): void {
    for (const list of [this.sums, this.shares, this.keptSums, this.keptShares])
      for (const sum of list) sum.fill(0);
    this.information.fill(0);
    this.open();
    for (let t = 0; t < order.length; t++) this.addTrial(order[t]!, places[t]!, 1);
    this.measure();
    this.settle();
  }

  /** Begins a list of changes. */
  begin(): void {
    this.spots = 0;
  }

  /** Notes that a trial of this kind comes to (sign 1) or leaves (−1) a grid position. */
  note(kind: number, place: number, sign: 1 | -1): void {
    for (const part of this.templates.kinds[kind]!) {
      let spot = 0;
      while (
        spot < this.spots &&
        !(this.spotPlace[spot] === place && this.spotTemplate[spot] === part.template)
      )
        spot++;
      if (spot === this.spots) {
        this.spots++;
        this.spotPlace[spot] = place;
        this.spotTemplate[spot] = part.template;
        if (this.spotSigns[spot] === undefined) {
          this.spotSigns[spot] = new Float64Array(this.columns);
          this.spotField[spot] = new Float64Array(this.columns);
        }
        this.spotSigns[spot]!.fill(0);
      }
      this.spotSigns[spot]![part.column]! += sign;
    }
  }

  /** Writes M as it would be after the noted changes to `candidate`; nothing else changes. */
  tryChanges(): void {
    const { columns, candidate, spots } = this;
    candidate.set(this.information);
    for (let e = 0; e < spots; e++) {
      const signs = this.spotSigns[e]!;
      const field = this.spotField[e]!;
      this.fieldAt(this.templates.templates[this.spotTemplate[e]!]!, this.spotPlace[e]!, field);
      for (let i = 0; i < columns; i++) {
        const sign = signs[i]!;
        if (sign === 0) continue;
        for (let j = 0; j < columns; j++) {
          const change = sign * field[j]!;
          candidate[i * columns + j]! += change;
          candidate[j * columns + i]! += change;
        }
      }
      for (let f = 0; f <= e; f++) this.addCross(e, f);
    }
  }

  /** Makes the noted changes part of the sums and `candidate` the present M. Call after `tryChanges`. */
  accept(): void {
    this.open();
    for (let e = 0; e < this.spots; e++) {
      const signs = this.spotSigns[e]!;
      const template = this.templates.templates[this.spotTemplate[e]!]!;
      for (let i = 0; i < this.columns; i++)
        if (signs[i] !== 0) this.addEvent(template, this.spotPlace[e]!, i, signs[i]!);
    }
    this.settle();
  }

  /** Begins a move of many trials: `addTrial` for each that leaves and comes, `measure`, then `settle` or `putBack`. */
  open(): void {
    this.low = this.templates.volumes;
    this.high = 0;
  }

  /** Undoes the move: only the volumes it touched are written. */
  putBack(): void {
    for (let j = 0; j < this.columns; j++) {
      copyBetween(this.keptSums[j]!, this.sums[j]!, this.low, this.high);
      this.shares[j]!.set(this.keptShares[j]!);
    }
  }

  /** Makes the move's sums and `candidate` the present ones. */
  settle(): void {
    this.information.set(this.candidate);
    for (let j = 0; j < this.columns; j++) {
      copyBetween(this.sums[j]!, this.keptSums[j]!, this.low, this.high);
      this.keptShares[j]!.set(this.shares[j]!);
    }
  }

  /** Adds (1) or takes away (−1) a trial in the sums; `measure` then gives M. */
  addTrial(kind: number, place: number, sign: 1 | -1): void {
    for (const part of this.templates.kinds[kind]!)
      this.addEvent(this.templates.templates[part.template]!, place, part.column, sign);
  }

  /** Writes M of the changed sums to `candidate`: the present M and what changed between the volumes touched. */
  measure(): void {
    const { columns, sums, shares, keptSums, keptShares, candidate, information, low, high } = this;
    for (let i = 0; i < columns; i++)
      for (let j = 0; j <= i; j++) {
        let value = 0;
        const a = sums[i]!;
        const b = sums[j]!;
        const c = keptSums[i]!;
        const d = keptSums[j]!;
        for (let n = low; n < high; n++) value += a[n]! * b[n]! - c[n]! * d[n]!;
        const e = shares[i]!;
        const f = shares[j]!;
        const g = keptShares[i]!;
        const h = keptShares[j]!;
        for (let k = 0; k < e.length; k++) value -= e[k]! * f[k]! - g[k]! * h[k]!;
        const at = i * columns + j;
        candidate[at] = information[at]! + value;
        candidate[j * columns + i] = candidate[at]!;
      }
  }

  private addEvent(template: Template, place: number, column: number, sign: number): void {
    const sum = this.sums[column]!;
    const from = template.from[place]!;
    const end = template.to[place]!;
    if (from < this.low) this.low = from;
    if (end > this.high) this.high = end;
    const values = template.values;
    for (let n = from, at = place * template.stride; n < end; n++, at++) sum[n]! += sign * values[at]!;
    const share = this.shares[column]!;
    const rank = share.length;
    for (let k = 0, at = place * rank; k < rank; k++, at++) share[k]! += sign * template.nuisance[at]!;
  }

  /** R_e[j] = z_e·s_j − w_e·a_j for every column j. */
  private fieldAt(template: Template, place: number, out: Float64Array): void {
    const from = template.from[place]!;
    const end = template.to[place]!;
    const values = template.values;
    const start = place * template.stride;
    const nuisance = template.nuisance;
    const rank = this.templates.rank;
    for (let j = 0; j < this.columns; j++) {
      const sum = this.sums[j]!;
      const share = this.shares[j]!;
      let value = 0;
      for (let n = from, at = start; n < end; n++, at++) value += values[at]! * sum[n]!;
      for (let k = 0, at = place * rank; k < rank; k++, at++) value -= nuisance[at]! * share[k]!;
      out[j] = value;
    }
  }

  /** Adds what two of the changes share (or one with itself). */
  private addCross(e: number, f: number): void {
    const { columns, candidate } = this;
    const shared =
      e === f
        ? this.templates.templates[this.spotTemplate[e]!]!.self[this.spotPlace[e]!]!
        : this.shared(e, f);
    const a = this.spotSigns[e]!;
    const b = this.spotSigns[f]!;
    for (let i = 0; i < columns; i++) {
      if (a[i] === 0) continue;
      for (let j = 0; j < columns; j++) {
        if (b[j] === 0) continue;
        const change = a[i]! * b[j]! * shared;
        candidate[i * columns + j]! += change;
        if (e !== f) candidate[j * columns + i]! += change;
      }
    }
  }

  /** G(e, f) = z_e·z_f − w_e·w_f. */
  private shared(e: number, f: number): number {
    const a = this.templates.templates[this.spotTemplate[e]!]!;
    const b = this.templates.templates[this.spotTemplate[f]!]!;
    const g = this.spotPlace[e]!;
    const h = this.spotPlace[f]!;
    const from = Math.max(a.from[g]!, b.from[h]!);
    const end = Math.min(a.to[g]!, b.to[h]!);
    let value = 0;
    const shiftA = g * a.stride - a.from[g]!;
    const shiftB = h * b.stride - b.from[h]!;
    for (let n = from; n < end; n++) value += a.values[shiftA + n]! * b.values[shiftB + n]!;
    const rank = this.templates.rank;
    for (let k = 0; k < rank; k++) value -= a.nuisance[g * rank + k]! * b.nuisance[h * rank + k]!;
    return value;
  }
}

function copyBetween(from: Float64Array, to: Float64Array, low: number, high: number): void {
  for (let n = low; n < high; n++) to[n] = from[n]!;
}
