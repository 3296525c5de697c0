import { InputError } from '../../engine/errors.ts';
import { type AdjustableVariant, apartFrom } from '../../list/adjustable.ts';
import { goalWords } from '../../list/figure-words.ts';
import { GOAL_FORMS, readGoals } from '../../list/goal-words.ts';
import { type ChosenPart, chosenPart } from '../../list/part-names.ts';
import { answered, type ChoiceAnswer, startOf } from '../choice-answer.ts';
import { type PartScale, partScales } from '../choice-input.ts';
import { choiceText } from '../choice-text.ts';
import { fitted } from '../fit-run.ts';
import { EXIT, type Io } from '../io.ts';
import { adjustableFrom } from '../list-input.ts';
import { flag, type RawOptions, text } from '../options.ts';
import { Progress } from '../progress.ts';

/** Most parts of one question. */
const MOST_PARTS = 3;

/** The value of a part that meets a goal, or of up to three parts that explain a measurement. */
export async function choose(named: string, list: string | null, options: RawOptions, io: Io): Promise<number> {
  const until = text(options, 'until');
  const measured = text(options, 'fit');
  if ((until === null) === (measured === null)) {
    throw new InputError({
      code: 'one-question',
      where: 'choose',
      got: until === null ? 'no goal' : 'a goal and a measurement',
      expected: `--until with a goal such as ${GOAL_FORMS[1]}, or --fit with a file of Hz and dB`,
    });
  }
  const goals = until === null ? [] : readGoals(until, '--until');
  const variants = await adjustableFrom(list, options);
  const parts = chosenParts(named, variants);
  if (
    until !== null &&
    (parts.length !== goals.length || (goals.length > 1 && goals.some((goal) => goal.kind === 'loudest')))
  ) {
    throw new InputError({
      code: 'goals-and-parts',
      where: 'choose',
      got: `${counted(parts.length, 'part')} and ${counted(goals.length, 'goal')}${goals.length > 1 ? ` (${goals.map(goalWords).join('; ')})` : ''}`,
      expected: 'one part for one goal, or two parts for two goals that each give a figure a value',
    });
  }
  if (
    variants.some(({ list: { station } }) => station.level === 0) &&
    !parts.some(({ key }) => key === 'station.level')
  ) {
    throw new InputError({
      code: 'no-carrier',
      where: 'station.level',
      got: '0 V',
      expected: 'a carrier: with none there is nothing to choose by',
    });
  }
  const first = variants[0] as AdjustableVariant;
  const trial = new Map(partScales(parts, first, options).map((scale) => [scale.part.key, startOf(scale)]));
  const apart = apartFrom(variants, trial);
  const progress = new Progress(io, flag(options, 'quiet'));
  if (measured !== null) return fitted(apart, parts, measured, options, progress, io);
  const answers: { answer: ChoiceAnswer; scales: readonly PartScale[] }[] = [];
  for (const [k, variant] of apart.entries()) {
    const scales = partScales(parts, variant, options);
    const share = [k / apart.length, (k + 1) / apart.length] as const;
    answers.push({ answer: await answered(variant, goals, scales, progress, share), scales });
  }
  progress.clear();
  await progress.pause();
  if (flag(options, 'json')) {
    const variantsOut = answers.map(({ answer, scales }) => ({ ...answer, parts: scales.map(partRecord) }));
    const record = { format: 'presolder-choice/1', goals: goals.map(goalWords), variants: variantsOut };
    io.out(`${JSON.stringify(record, null, 2)}\n`);
  } else io.out(`${answers.map(({ answer, scales }) => choiceText(answer, goals, scales)).join('\n\n')}\n`);
  return answers.every(({ answer }) => answer.met) ? EXIT.done : EXIT.notMet;
}

/** The parts named, each once, the same in every variant. */
function chosenParts(named: string, variants: readonly AdjustableVariant[]): ChosenPart[] {
  const names = named.split(',').map((one) => one.trim());
  const parts = names.map((name) => {
    const [first, ...others] = variants.map((variant) => chosenPart(name, variant.list)) as [
      ChosenPart,
      ...ChosenPart[],
    ];
    if (others.every((part) => part.key === first.key)) return first;
    throw new InputError({
      code: 'not-in-all',
      where: 'PART',
      got: JSON.stringify(name),
      expected: 'a part that all variants have',
      hint: 'the variants have different loads: choose them one at a time, with --load',
    });
  });
  const keys = new Set(parts.map((part) => part.key));
  if (parts.length <= MOST_PARTS && keys.size === parts.length) return parts;
  throw new InputError({
    code: 'too-many-parts',
    where: 'PART',
    got: JSON.stringify(named),
    expected: `one part, or at most ${MOST_PARTS} different ones with commas between them`,
  });
}

/** A part's scale for the JSON answer. */
export function partRecord({ part, low, high, among, standing }: PartScale): Record<string, unknown> {
  return { key: part.key, kind: part.kind, listed: standing, searchedFrom: low, searchedTo: high, among };
}

function counted(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
