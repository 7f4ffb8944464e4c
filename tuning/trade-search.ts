/** Search for the best trades of several objectives: one evolution for each way of weighing them. */
import { Evolution } from './evolution.ts';
import { paretoFront, type Trade } from './pareto-front.ts';

/** A candidate that was tried; objectives are relative to the start's, infinite where a hard limit is broken. */
export interface TriedCandidate extends Trade {
  variables: readonly number[];
  /** Share of runs that broke a limit or tripped. */
  broken: number;
}

export interface TradeSearch {
  /** Where to start, in the evolution's own variables. */
  start: readonly number[];
  /** First spread of the candidates. */
  step: number;
  seed: number;
  /** Candidates that may be tried in all, the start included. */
  budget: number;
  /** Number of objectives. */
  objectives: number;
  /**
   * Tries candidates, in any order and side by side, and gives what came out in the order asked. Objectives as they are;
   * `broken` the share of runs that broke a limit.
   */
  evaluate(candidates: readonly (readonly number[])[]): Promise<{ objectives: number[]; broken: number }[]>;
}

export interface TradeResult {
  start: TriedCandidate;
  tried: readonly TriedCandidate[];
  front: readonly TriedCandidate[];
}

/** A broken limit costs more than any trade, and more the more runs break it. */
const BROKEN_COST = 1e3;
/** Share of the plain sum in Chebyshev's weighing, so that no objective may drift where another decides. */
const SUM_SHARE = 0.1;

/**
 * Evolutions take turns, one for the mean of all objectives and one that leans on each; every candidate that any of them
 * tries goes into one pool, whose front is the answer. Costs are Chebyshev's weighing of the objectives over the start's
 * (Steuer and Choo, Mathematical Programming 26, 1983). The same seed gives the same answer, however the work is shared out.
 */
export async function searchTrades(search: TradeSearch): Promise<TradeResult> {
  const [first] = await search.evaluate([search.start]);
  const scale = first.objectives.map((value) => (value > 0 ? value : 1));
  const judged = (variables: readonly number[], found: { objectives: number[]; broken: number }): TriedCandidate => ({
    variables,
    broken: found.broken,
    objectives: found.objectives.map((value, i) => value / scale[i]),
  });
  const start = judged(search.start, first);
  const tried: TriedCandidate[] = [start];
  const leanings = leaningsOf(search.objectives);
  const evolutions = leanings.map((_, i) => new Evolution(search.start, search.step, search.seed * 1009 + i));
  let spent = 1;
  for (let turn = 0; ; turn++) {
    // Every other turn is the even one's: it looks for what is better in all.
    const at = turn % 2 === 0 ? 0 : 1 + (((turn - 1) / 2) % search.objectives);
    const evolution = evolutions[at];
    if (spent + evolution.population > search.budget) break;
    const candidates = evolution.ask().map((candidate) => [...candidate]);
    const found = await search.evaluate(candidates);
    spent += candidates.length;
    const results = candidates.map((candidate, i) => judged(candidate, found[i]));
    evolution.tell(results.map((result) => costOf(result, leanings[at])));
    tried.push(...results);
  }
  return { start, tried, front: paretoFront(tried.filter(({ broken }) => broken === 0)) };
}

/** Evenly, then with most weight on each objective in turn. */
function leaningsOf(objectives: number): number[][] {
  const even = new Array<number>(objectives).fill(1);
  return [even, ...even.map((_, lean) => even.map((_, i) => (i === lean ? 2 : 0.7)))];
}

function costOf({ objectives, broken }: TriedCandidate, leaning: readonly number[]): number {
  if (broken > 0) return BROKEN_COST * (1 + broken);
  const weighed = objectives.map((value, i) => value * leaning[i]);
  return Math.max(...weighed) + SUM_SHARE * weighed.reduce((sum, value) => sum + value, 0);
}
