import { countCorrect, type Hidden, hiddenSequence, TRIAL_RANGE } from '../../engine/measure/blind-test.ts';
import { blindWords } from '../blind-words.ts';
import type { Bench, Heard, Matching } from './bench.ts';
import { button, element, section } from './dom.ts';

interface Running {
  readonly pair: { readonly first: Heard; readonly second: Heard };
  /** Drawn anew for every test, and told to nobody before its end. */
  readonly hidden: readonly Hidden[];
  readonly answers: Hidden[];
  /** Level matching before the test, which the test sets to loudness. */
  readonly before: Matching;
}

/** What the section does to the rest of the page. */
export interface BlindStage {
  lock(locked: boolean): void;
  play(): void;
}

/** The blind test: which of two variants is the hidden one? */
export class BlindSection {
  readonly root: HTMLElement;
  private readonly bench: Bench;
  private readonly stage: BlindStage;
  private running: Running | null = null;
  private readonly first = element('select', { id: 'blind-first' });
  private readonly second = element('select', { id: 'blind-second' });
  private readonly trials = element('input', {
    type: 'number',
    id: 'blind-trials',
    min: `${TRIAL_RANGE.least}`,
    max: `${TRIAL_RANGE.most}`,
    value: '16',
  });
  private readonly setUp: HTMLFormElement;
  private readonly trial = element('div', { class: 'trial', hidden: '' });
  private readonly count = element('p', { role: 'status' });
  private readonly heard = element('div', { class: 'choices', role: 'group', 'aria-label': 'Listen to' });
  private readonly answers = element('div', { class: 'choices', role: 'group', 'aria-label': 'Which one is X?' });
  private readonly outcome = element('div', { role: 'status', id: 'blind-outcome' });

  constructor(bench: Bench, stage: BlindStage) {
    this.bench = bench;
    this.stage = stage;
    this.setUp = element(
      'form',
      { class: 'row' },
      element('label', { for: 'blind-first' }, 'A is'),
      this.first,
      element('label', { for: 'blind-second' }, 'B is'),
      this.second,
      element('label', { for: 'blind-trials' }, 'Trials'),
      this.trials,
      element('button', { type: 'submit', id: 'blind-start' }, 'Start'),
    );
    this.setUp.addEventListener('submit', (event) => {
      event.preventDefault();
      this.start();
    });
    this.trial.append(
      this.count,
      this.heard,
      element('p', {}, 'X is one of the two. Which?'),
      this.answers,
      button('Stop the test', () => this.stop(), { id: 'blind-stop' }),
    );
    this.root = section(
      'blind',
      'Blind test',
      element(
        'p',
        {},
        'In every trial X is A or B, drawn by chance. Listen to A, B and X as long as you like, then say which X is. Loudness is matched; the number of trials is fixed before.',
      ),
      this.setUp,
      this.trial,
      this.outcome,
    );
  }

  /** Offers the variants that are there. */
  refresh(): void {
    if (this.running) return;
    const { variants } = this.bench;
    for (const [select, standard] of [
      [this.first, 0],
      [this.second, variants.length - 1],
    ] as const) {
      const kept = variants.some(({ name }) => name === select.value) ? select.value : variants[standard]?.name;
      select.replaceChildren(...variants.map(({ name }) => element('option', { value: name }, name)));
      if (kept !== undefined) select.value = kept;
    }
    for (const field of this.setUp.querySelectorAll('button')) field.disabled = variants.length < 2;
  }

  get isRunning(): boolean {
    return this.running !== null;
  }

  private start(): void {
    const named = (select: HTMLSelectElement): Heard | undefined =>
      this.bench.variants.find(({ name }) => name === select.value);
    const [first, second] = [named(this.first), named(this.second)];
    const trials = Math.round(Number(this.trials.value));
    if (!first || !second || first === second) {
      this.outcome.textContent = 'Choose two different variants.';
      return;
    }
    if (!first.whole || !second.whole) {
      this.outcome.textContent = 'They are still being rendered; start again in a moment.';
      return;
    }
    if (!(trials >= TRIAL_RANGE.least && trials <= TRIAL_RANGE.most)) {
      this.outcome.textContent = `Between ${TRIAL_RANGE.least} and ${TRIAL_RANGE.most} trials.`;
      return;
    }
    const hidden = hiddenSequence(trials, chance);
    this.running = { pair: { first, second }, hidden, answers: [], before: this.bench.matching };
    this.bench.setMatching('loudness');
    document.body.dataset.testing = 'yes';
    this.stage.lock(true);
    this.outcome.replaceChildren();
    this.setUp.hidden = true;
    this.trial.hidden = false;
    this.offer();
    this.stage.play();
  }

  /** A new trial: nothing on the page differs from one to the next but its number. */
  private offer(): void {
    const { running } = this;
    if (!running) return;
    const { pair, hidden, answers } = running;
    const x = pair[hidden[answers.length] as Hidden];
    this.count.textContent = `Trial ${answers.length + 1} of ${hidden.length}`;
    const listen = (label: string, heard: Heard): HTMLButtonElement =>
      button(label, () => this.hear(label, heard), {
        id: `blind-hear-${label.charAt(0).toLowerCase()}`,
        'aria-pressed': 'false',
      });
    this.heard.replaceChildren(
      listen(`A: ${pair.first.name}`, pair.first),
      listen(`B: ${pair.second.name}`, pair.second),
      listen('X', x),
    );
    this.answers.replaceChildren(
      button('X is A', () => this.answer('first'), { id: 'blind-answer-a' }),
      button('X is B', () => this.answer('second'), { id: 'blind-answer-b' }),
    );
    this.hear('X', x);
    this.heard.querySelector<HTMLElement>('#blind-hear-x')?.focus();
  }

  private hear(label: string, heard: Heard): void {
    this.bench.select(heard);
    for (const one of this.heard.querySelectorAll('button'))
      one.setAttribute('aria-pressed', `${one.textContent === label}`);
  }

  private answer(answer: Hidden): void {
    const { running } = this;
    if (!running) return;
    running.answers.push(answer);
    if (running.answers.length < running.hidden.length) this.offer();
    else this.finish(running);
  }

  private finish({ hidden, answers, pair }: Running): void {
    const { score, probability, meaning } = blindWords(countCorrect(hidden, answers), hidden.length);
    this.close();
    this.outcome.replaceChildren(
      element('p', {}, element('strong', {}, score), `, ‘${pair.first.name}’ against ‘${pair.second.name}’.`),
      element(
        'p',
        {},
        'Probability of doing as well by guessing: ',
        element('span', { class: 'figure', id: 'blind-probability' }, probability),
        '.',
      ),
      element('p', {}, meaning),
    );
    this.root.querySelector<HTMLElement>('#blind-start')?.focus();
  }

  private stop(): void {
    this.close();
    this.outcome.textContent = 'Stopped: a test that is not finished has no result.';
    this.root.querySelector<HTMLElement>('#blind-start')?.focus();
  }

  private close(): void {
    const before = this.running?.before ?? 'level';
    this.running = null;
    delete document.body.dataset.testing;
    this.trial.hidden = true;
    this.setUp.hidden = false;
    this.bench.setMatching(before);
    this.stage.lock(false);
    this.refresh();
  }
}

/** A number of 0 to 1 that nobody can foresee. */
function chance(): number {
  return (crypto.getRandomValues(new Uint32Array(1))[0] as number) / 2 ** 32;
}
