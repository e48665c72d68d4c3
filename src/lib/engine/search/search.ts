import { exp, log } from '../elementary';
import { EngineError } from '../errors';
import { seeded, type Random } from '../random';
import type { Seconds } from '../units';
import { copyArrangement, emptyArrangement, randomArrangement, type Arrangement } from './arrangement';
import { Criterion } from './criterion';
import { Field } from './field';
import { Moves } from './moves';
import { partsOf, type SearchProblem } from './problem';
import { checkRules, stepsOf } from './rules';
import { eventsOf, scoreEvents } from './score';
import { makeTemplates } from './templates';

/** One run the search found: kind and onset of each trial in order of time, and how sharp it is. */
export interface Candidate {
  readonly order: number[];
  /** Seconds; each a whole multiple of the grid, computed from its own index. */
  readonly onsets: Seconds[];
  readonly score: number;
  readonly perContrast: number[];
}

export interface Progress {
  /** Moves proposed, also those a rule forbade. */
  readonly iterations: number;
  /** Designs scored. */
  readonly designs: number;
  readonly accepted: number;
  /** Number of the present cooling, from 1; each is twice as long as the one before. */
  readonly cooling: number;
  readonly bestScore: number;
  /** Score of the run before the search, where one was given. */
  readonly presentScore: number | null;
  /** How the best score grew, thinned to at most 200 points. */
  readonly history: readonly { readonly designs: number; readonly score: number }[];
}

export interface SearchOptions {
  /** Score of the run as it is now, for comparison (`scoreEvents`). */
  readonly presentScore?: number;
  /** Milliseconds; only says when a slice ends, so it never changes what is found. */
  readonly now?: () => number;
}

/** Designs of the first cooling; doubled each time, so that a search may be stopped early or left running. */
const FIRST_COOLING = 20_000;
const HOT = 1e-3;
const COLD = 1e-4;
const LOG_RATIO = log(COLD / HOT);
/** Sums are made anew after so many accepted moves; rounding drifts by about 1e-12 in that time. */
const REBUILD_EVERY = 50_000;
const MAX_POSITIONS = 40_000;

/**
 * The timing search: simulated annealing over order and gaps under hard rules, for the A criterion of the chosen
 * contrasts. Seeded: the same problem and seed give the same candidates after the same number of iterations, on any
 * machine and however the work is sliced.
 *
 * Coolings follow one another, each twice as long; odd ones start from a fresh random candidate, even ones from the
 * best so far. Temperatures are shares of the best score.
 * Source: Kirkpatrick S, Gelatt CD, Vecchi MP (1983) Optimization by simulated annealing. Science 220:671–680; the
 * criterion: Dale AM (1999) Hum Brain Mapp 8:109–114 (both from memory).
 *
 * Errors: `EngineError` for malformed numbers or rules that clash (ask `checkRules` first).
 */
export class Search {
  private readonly random: Random;
  private readonly field: Field;
  private readonly criterion: Criterion;
  private readonly moves: Moves;
  private readonly current: Arrangement;
  private readonly bestFound: Arrangement;
  private readonly now: () => number;
  private readonly presentScore: number | null;
  private readonly steps;
  private currentScore = 0;
  private bestScore = -1;
  private iterations = 0;
  private designs = 0;
  private accepted = 0;
  private cooling = 0;
  private coolingLength = FIRST_COOLING / 2;
  private coolingAt = 0;
  private temperature = HOT;
  private sinceRebuild = 0;
  private history: { designs: number; score: number }[] = [];

  constructor(
    private readonly problem: SearchProblem,
    seed: string,
    options: SearchOptions = {}
  ) {
    const check = checkRules(problem.rules);
    if (!check.ok)
      throw new EngineError(
        'set of rules',
        'impossible',
        'rules that can all be kept',
        check.problems.join(' ')
      );
    const { rules } = problem;
    if (problem.times.length !== rules.volumes)
      throw new EngineError(
        'number of volume times',
        problem.times.length,
        `${rules.volumes}, one per volume`,
        'Give as many times as volumes.'
      );
    const parts = partsOf(problem);
    this.steps = stepsOf(rules);
    const positions = Math.floor(rules.lengthSeconds / rules.grid) + 1;
    if (positions > MAX_POSITIONS)
      throw new EngineError(
        'onset grid',
        rules.grid,
        `a grid that divides the run into at most ${MAX_POSITIONS} steps`,
        'Use TR, TR/2 or TR/4.'
      );
    this.random = seeded(`search/${seed}`);
    this.criterion = new Criterion(problem.contrasts);
    this.field = new Field(makeTemplates(problem, parts, positions), problem.contrasts[0]!.length);
    this.current = emptyArrangement(this.steps.trials);
    this.bestFound = emptyArrangement(this.steps.trials);
    this.moves = new Moves(rules, this.steps, this.random, this.current);
    this.now = options.now ?? (() => performance.now());
    this.presentScore = options.presentScore ?? null;
    this.beginCooling();
  }

  /**
   * Goes on for so many iterations or for about so many milliseconds, then tells where it stands. Call it again to go
   * on; stop by not calling it.
   */
  step(budget: { readonly iterations: number } | { readonly milliseconds: number }): Progress {
    if ('iterations' in budget) {
      for (let i = 0; i < budget.iterations; i++) this.iterate();
      return this.progress();
    }
    const end = this.now() + budget.milliseconds;
    do {
      for (let i = 0; i < 200; i++) this.iterate();
    } while (this.now() < end);
    return this.progress();
  }

  progress(): Progress {
    const { iterations, designs, accepted, cooling, bestScore, presentScore } = this;
    return { iterations, designs, accepted, cooling, bestScore, presentScore, history: this.history.slice() };
  }

  /** The best candidate so far, scored anew from a design matrix built for it. */
  best(): Candidate {
    const order = Array.from(this.bestFound.order);
    const onsets = Array.from(this.bestFound.places, (place) => onsetAt(place, this.problem.rules.grid));
    return { order, onsets, ...scoreEvents(this.problem, eventsOf(this.problem, order, onsets)) };
  }

  /** The candidate under work and its score by the running sums, for tests of exactness. */
  underWork(): { order: number[]; onsets: Seconds[]; score: number } {
    return {
      order: Array.from(this.current.order),
      onsets: Array.from(this.current.places, (place) => onsetAt(place, this.problem.rules.grid)),
      score: this.currentScore
    };
  }

  private beginCooling(): void {
    this.cooling++;
    this.coolingLength *= 2;
    this.coolingAt = 0;
    const isFresh = this.cooling % 2 === 1;
    copyArrangement(
      isFresh ? randomArrangement(this.problem.rules, this.steps, this.random) : this.bestFound,
      this.current
    );
    copyArrangement(this.current, this.moves.next);
    this.rebuild();
    this.noteBest();
  }

  private rebuild(): void {
    this.field.rebuild(this.current.order, this.current.places);
    this.currentScore = this.criterion.score(this.field.information);
    this.sinceRebuild = 0;
  }

  private iterate(): void {
    this.iterations++;
    // Every iteration counts for the cooling, so that one where most moves are forbidden ends too.
    if (this.coolingAt >= this.coolingLength) this.beginCooling();
    // The temperature falls as HOT · (COLD/HOT)^share; it is looked at every 64 iterations.
    if (this.coolingAt % 64 === 0)
      this.temperature = HOT * exp(LOG_RATIO * (this.coolingAt / this.coolingLength));
    this.coolingAt++;
    if (!this.moves.propose()) return;
    const { next, low, high } = this.moves;
    const changed = this.countChanges(low, high);
    const isSmall = changed <= 2;
    if (isSmall) this.scoreSmall(low, high);
    else this.scoreLarge(low, high);
    this.designs++;
    const score = this.criterion.score(this.field.candidate);
    const loss = this.currentScore - score;
    if (loss <= 0 || this.random.next() < exp(-loss / (this.temperature * this.bestScore))) {
      if (isSmall) this.field.accept();
      else this.field.settle();
      copySpan(next, this.current, low, high);
      this.currentScore = score;
      this.accepted++;
      if (++this.sinceRebuild >= REBUILD_EVERY) this.rebuild();
      if (this.currentScore > this.bestScore) this.noteBest();
    } else {
      if (!isSmall) this.field.putBack();
      copySpan(this.current, next, low, high);
    }
  }

  private countChanges(low: number, high: number): number {
    let changed = 0;
    for (let t = low; t <= high; t++) if (this.isChanged(t)) changed++;
    return changed;
  }

  private isChanged(t: number): boolean {
    const { current } = this;
    const { next } = this.moves;
    return current.places[t] !== next.places[t] || current.order[t] !== next.order[t];
  }

  private scoreSmall(low: number, high: number): void {
    const { field, current } = this;
    const { next } = this.moves;
    field.begin();
    for (let t = low; t <= high; t++)
      if (this.isChanged(t)) {
        field.note(current.order[t]!, current.places[t]!, -1);
        field.note(next.order[t]!, next.places[t]!, 1);
      }
    field.tryChanges();
  }

  private scoreLarge(low: number, high: number): void {
    const { field, current } = this;
    const { next } = this.moves;
    field.open();
    for (let t = low; t <= high; t++)
      if (this.isChanged(t)) {
        field.addTrial(current.order[t]!, current.places[t]!, -1);
        field.addTrial(next.order[t]!, next.places[t]!, 1);
      }
    field.measure();
  }

  private noteBest(): void {
    if (this.currentScore <= this.bestScore) return;
    copyArrangement(this.current, this.bestFound);
    this.bestScore = this.currentScore;
    const earlier = this.history.at(-2);
    // Points closer than a thousandth replace one another; a long list is thinned to every other point.
    if (earlier && this.bestScore < earlier.score * 1.001) this.history.pop();
    this.history.push({ designs: this.designs, score: this.bestScore });
    if (this.history.length > 200)
      this.history = this.history.filter((_, i, all) => i % 2 === 0 || i === all.length - 1);
  }
}

/** A grid onset in seconds, from its own index, rounded to the microsecond that a document can hold. */
export function onsetAt(place: number, grid: Seconds): Seconds {
  return Math.round(place * grid * 1e6) / 1e6;
}

function copySpan(from: Arrangement, to: Arrangement, low: number, high: number): void {
  for (let t = low; t <= high; t++) {
    to.order[t] = from.order[t]!;
    to.extra[t] = from.extra[t]!;
    to.places[t] = from.places[t]!;
  }
}
