import { choosePart } from '../engine/choosing/choose-part.ts';
import { choosePair } from '../engine/choosing/choose-two.ts';
import { CircuitFigures, type Figure, unlessImpossible } from '../engine/choosing/figures.ts';
import type { FigureGoal, Goal } from '../engine/choosing/goals.ts';
import { mostHelpful, obstacles, type Trial } from '../engine/choosing/in-the-way.ts';
import { restCautions } from '../engine/circuits/cautions.ts';
import type { CostPart } from '../engine/circuits/cost-by-part.ts';
import { restPoint } from '../engine/circuits/rest-point.ts';
import { InputError } from '../engine/errors.ts';
import type { AdjustableVariant, PartValues } from '../list/adjustable.ts';
import { chosenPart, standingValue } from '../list/part-names.ts';
import { cautionText } from '../results/caution-text.ts';
import type { PartScale } from './choice-input.ts';
import { type ChoiceRow, choiceRows, goalFigures, neighbours, type Role } from './choice-rows.ts';
import { driven } from './driven.ts';
import type { Progress } from './progress.ts';

/** What keeps a goal from being met. */
export interface InTheWay {
  /** Parts by what they cost at the goal's frequency, the largest first; empty when the figure is no response. */
  readonly costs: readonly { readonly part: CostPart; readonly decibels: number; readonly hertz: number }[];
  /** A change of another part that brings the figure nearest. */
  readonly helps: { readonly change: string; readonly figure: Figure; readonly value: number } | null;
}

/** The answer for one variant. */
export interface ChoiceAnswer {
  readonly variant: string;
  readonly met: boolean;
  /** Every value set that meets the goals, the loudest first. */
  readonly exact: readonly (readonly number[])[];
  /** The first of them or what comes nearest; null where no value lets the circuit be. */
  readonly nearest: readonly number[] | null;
  readonly best: readonly number[] | null;
  readonly rows: readonly ChoiceRow[];
  readonly inTheWay: InTheWay | null;
  /** What the circuit with the nearest values gives cause for. */
  readonly cautions: readonly string[];
}

/** Points a decade at which a part's whole range is looked at: fewer where each takes a whole steady tone. */
const POINTS_A_DECADE = 40;
const TONE_POINTS_A_DECADE = 10;
/** Rows are shown for this many of the values that meet a goal. */
const MOST_SHOWN = 3;

/** Chooses one part, or two for two goals, of one variant. */
export async function answered(
  variant: AdjustableVariant,
  goals: readonly Goal[],
  scales: readonly PartScale[],
  progress: Progress,
  share: readonly [number, number],
): Promise<ChoiceAnswer> {
  const what = `choosing ${scales.map(({ part }) => part.name).join(', ')}`;
  const perDecade = goalFigures(goals).some((figure) => figure.kind === 'harmonic')
    ? TONE_POINTS_A_DECADE
    : POINTS_A_DECADE;
  const searched = scales.map(({ part, low, high, members }) => ({
    low,
    high,
    perDecade,
    members: members.filter((member) => member === 0 || (member >= low && member <= high)),
    zero: part.limits.orZero === true,
  }));
  const circuitAt = (values: readonly number[]) => variant.circuitWith(valuesOf(scales, values)).circuit;
  let exact: readonly (readonly number[])[];
  let nearest: readonly number[] | null;
  let best: readonly number[] | null;
  const [first, second] = searched;
  if (second && first) {
    const question = {
      goals: goals as readonly FigureGoal[] as readonly [FigureGoal, FigureGoal],
      scales: [first, second] as const,
      standing: scales.map(startOf) as unknown as readonly [number, number],
      circuitAt,
    };
    ({ exact, nearest, best } = await driven(choosePair(question), progress, what, ...share));
  } else {
    const question = {
      goal: goals[0] as Goal,
      scale: first as (typeof searched)[number],
      circuitAt: (value: number) => circuitAt([value]),
    };
    const found = await driven(choosePart(question), progress, what, ...share);
    exact = found.exact.map((value) => [value]);
    nearest = found.nearest === null ? null : [found.nearest];
    best = found.best === null ? null : [found.best];
  }
  const wanted: { role: Role; values: readonly number[] }[] = [];
  if (scales.every(({ standing }) => standing !== null)) {
    wanted.push({ role: 'as listed', values: scales.map(({ standing }) => standing as number) });
  }
  const shown = exact.length > 0 ? exact.slice(0, MOST_SHOWN) : nearest ? [nearest] : [];
  for (const values of shown) wanted.push(...about(values, scales, exact.length > 0 ? 'exact' : 'nearest'));
  return {
    variant: variant.name,
    met: exact.length > 0,
    exact,
    nearest,
    best,
    rows: choiceRows(wanted, best, scales, goalFigures(goals), variant),
    inTheWay: exact.length > 0 || nearest === null ? null : inTheWay(variant, goals, scales, nearest),
    cautions: nearest === null ? [] : cautionsAt(variant, valuesOf(scales, nearest)),
  };
}

/** Values by the keys of their parts. */
function valuesOf(scales: readonly PartScale[], values: readonly number[]): PartValues {
  return new Map(scales.map(({ part }, k) => [part.key, values[k] as number]));
}

/** What a builder should know of a circuit with these values before it is built. */
export function cautionsAt(variant: AdjustableVariant, values: PartValues): string[] {
  const built = unlessImpossible(() => variant.circuitWith(values));
  const rest = built && unlessImpossible(() => restPoint(built.circuit));
  return built && rest ? [...restCautions(rest, built.ratings), ...built.cautions].map(cautionText) : [];
}

/** Where a search of several values begins: what stands on the list, or the middle of the range. */
export function startOf({ standing, low, high }: PartScale): number {
  return standing !== null && standing > 0 ? Math.min(Math.max(standing, low), high) : Math.sqrt(low * high);
}

/** Rows about values: of one part its neighbours, of two the four pairs of neighbours. */
function about(
  values: readonly number[],
  scales: readonly PartScale[],
  role: Role,
): { role: Role; values: readonly number[] }[] {
  const sides = values.map((value, k) => neighbours(value, scales[k]?.members ?? []));
  const [first, second] = sides;
  if (second && first) {
    const pairs = [first.below, first.above].flatMap((a) => [second.below, second.above].map((b) => [a, b]));
    const whole = pairs.filter((pair): pair is number[] => pair.every((value) => value !== null));
    return [{ role, values }, ...whole.map((pair) => ({ role: 'about' as const, values: pair }))];
  }
  return [
    ...(first?.below == null ? [] : [{ role: 'below' as const, values: [first.below] }]),
    { role, values },
    ...(first?.above == null ? [] : [{ role: 'above' as const, values: [first.above] }]),
  ];
}

/** The part of the cost table that a chosen part is itself. */
function ownCost(key: string): CostPart | null {
  if (key === 'detector.grid capacitor') return 'gridCapacitor';
  if (key === 'plate.bypass' || key === 'plate.second bypass') return 'plateBypass';
  if (key.startsWith('tuned circuit.')) return 'tunedCircuit';
  return key.startsWith('output.') || key.startsWith('plate.load.') ? 'load' : null;
}

/** Parts that a builder would change next, tried at half and at twice their value. */
const TRIED = ['leak', 'grid capacitor', 'bypass', 'load', 'supply', 'level', 'unloaded Q', 'tap', 'coupling'] as const;

/** What stands in the way of the first goal that the nearest values miss. */
function inTheWay(
  variant: AdjustableVariant,
  goals: readonly Goal[],
  scales: readonly PartScale[],
  nearest: readonly number[],
): InTheWay | null {
  const values = valuesOf(scales, nearest);
  const figures = unlessImpossible(() => new CircuitFigures(variant.circuitWith(values).circuit));
  const missed = goals
    .map((goal) => (goal.kind === 'figure' ? goal : goal.limit))
    .find((goal) => goal !== null && figures?.value(goal.figure) !== goal.target);
  if (!figures || !missed) return null;
  const own = scales.length === 1 ? ownCost(scales[0]?.part.key ?? '') : null;
  const costs = obstacles(figures, missed.figure, missed.target, own);
  if (costs && costs.parts.length > 0)
    return { costs: costs.parts.map((part) => ({ ...part, hertz: costs.hertz })), helps: null };
  const chosen = new Set(scales.map(({ part }) => part.key));
  const trials = TRIED.flatMap((name): Trial[] => {
    const part = partOf(name, variant);
    const standing = part && standingValue(variant.list, figures.rest.circuit, part.key);
    if (!part || !standing || chosen.has(part.key)) return [];
    return [0.5, 2].map((factor) => ({
      name: `${factor < 1 ? 'half' : 'twice'} the ${part.key === 'plate.supply' ? 'supply' : name}`,
      circuit: () => variant.circuitWith(new Map([...values, [part.key, factor * standing]])).circuit,
    }));
  });
  const best = mostHelpful(figures, missed.figure, missed.target, trials);
  return { costs: [], helps: best && { change: best.name, figure: missed.figure, value: best.value } };
}

/** The part of that name where this circuit has it. */
function partOf(name: string, variant: AdjustableVariant): ReturnType<typeof chosenPart> | null {
  try {
    return chosenPart(name, variant.list);
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}
