import { readQuantity } from '../../engine/parts/quantities.ts';
import type { CircuitRecord, VariantResult } from '../../results/result.ts';
import { circuitDrawing } from '../circuit-drawing.ts';
import { costliest, rowAt } from '../in-words.ts';
import { type PartValue, partValues, steppedText, valueText } from '../part-values.ts';
import { type Bench, type Heard, MOST_VARIANTS } from './bench.ts';
import { button, drawing, element, section } from './dom.ts';

/** Values that a step of a decade moves by, in the series that is stepped through. */
const DECADE_STEPS = 12;

/** Lines of the list that are no value on the drawing, each with what it may say. */
const OTHER_LINES: readonly (readonly [string, string])[] = [
  ['detector.tube', '76'],
  ['detector.kind', 'grid leak, plate bend, infinite impedance, diode, crystal'],
  ['detector.law', 'tube, square, linear'],
  ['detector.leak position', 'to cathode, across capacitor'],
  ['plate.load', 'resistor 220 kΩ, choke 250 H, transformer 1:3, phones 2 kΩ'],
  ['plate.carrier choke', '10 mH, none'],
  ['plate.dropping resistor', '47 kΩ, none'],
  ['output.into', 'next grid, ceramic earpiece, phones, nothing'],
  ['output.heard through', 'flat, magnetic phones, horn loudspeaker'],
  ['station.pre-emphasis', 'none, nrsc-1'],
];

/** The drawing, whose values are the controls, and the bench that a change makes. */
export class DrawingSection {
  readonly root: HTMLElement;
  private readonly bench: Bench;
  private readonly holder = element('div', { class: 'wide', tabindex: '0', role: 'region', 'aria-label': 'Drawing' });
  private readonly which = element('p', { class: 'lead' });
  private readonly costs = element('p', { class: 'note', id: 'cost-note' });
  private readonly more = element('div', { class: 'values' });
  private readonly form = element('form', { class: 'typed', hidden: '' });
  private readonly input = element('input', {
    type: 'text',
    id: 'typed-value',
    autocomplete: 'off',
    spellcheck: 'false',
  });
  private readonly inputLabel = element('label', { for: 'typed-value' });
  private readonly absentButton: HTMLButtonElement;
  private readonly fault = element('p', { class: 'fault', role: 'alert' });
  private readonly line = element('select', { id: 'other-line' });
  private readonly lineValue = element('input', { type: 'text', id: 'other-value', autocomplete: 'off' });
  private readonly removeButton: HTMLButtonElement;
  private readonly benchRow = element('form', { class: 'row bench', hidden: '' });
  private readonly nameInput = element('input', {
    type: 'text',
    id: 'keep-name',
    maxlength: '80',
    autocomplete: 'off',
  });
  /** What is drawn: the selected circuit, with the last change in it before its figures have come. */
  private drawn: CircuitRecord | null = null;
  private source: Heard | null = null;
  private key = '';
  private markedHertz = 5000;

  constructor(bench: Bench) {
    this.bench = bench;
    this.absentButton = button('Absent', () => this.setAbsent(), { id: 'typed-absent' });
    this.form.append(
      this.inputLabel,
      this.input,
      button('−', () => this.stepTyped(-1), { 'aria-label': 'One value down' }),
      button('+', () => this.stepTyped(1), { 'aria-label': 'One value up' }),
      element('button', { type: 'submit' }, 'Set'),
      this.absentButton,
      button('Cancel', () => this.closeForm()),
    );
    this.form.addEventListener('submit', (event) => {
      event.preventDefault();
      this.commitTyped();
    });
    this.form.addEventListener('keydown', (event) => {
      if (event.key === 'Escape') this.closeForm();
    });
    this.benchRow.append(
      element('label', { for: 'keep-name' }, 'Keep the bench as'),
      this.nameInput,
      element('button', { type: 'submit', id: 'keep' }, 'Keep'),
      button('Clear the bench', () => bench.clear(), { id: 'clear-bench' }),
    );
    this.benchRow.addEventListener('submit', (event) => {
      event.preventDefault();
      this.keep();
    });
    this.removeButton = button('Remove this variant', () => bench.remove(bench.selected), {
      id: 'remove',
      hidden: '',
    });
    this.line.append(...OTHER_LINES.map(([key]) => element('option', { value: key }, key)));
    this.line.addEventListener('change', () => this.hintLine());
    this.hintLine();
    const other = element(
      'form',
      { class: 'row' },
      element('label', { for: 'other-line' }, 'Another line of the list'),
      this.line,
      element('label', { for: 'other-value' }, 'is'),
      this.lineValue,
      element('button', { type: 'submit', id: 'other-set' }, 'Try'),
      this.removeButton,
    );
    other.addEventListener('submit', (event) => {
      event.preventDefault();
      this.setLine();
    });
    this.root = section(
      'drawing',
      'The drawing',
      this.which,
      this.holder,
      this.form,
      this.fault,
      this.costs,
      this.benchRow,
      this.more,
      other,
      element(
        'p',
        { class: 'note screen' },
        'Every value is a control: focus it, step through preferred values with the arrow keys (Page Up and Page Down by a decade), press Enter to type one, Delete for absent where a part can be left out.',
      ),
    );
    this.listen(this.holder);
    this.listen(this.more);
  }

  /** Draws what is selected now. */
  refresh(markedHertz: number): void {
    this.markedHertz = markedHertz;
    const { selected } = this.bench;
    const shown = selected.kind === 'sent' ? (this.source ?? this.bench.variants[0] ?? null) : selected;
    if (shown?.result) this.drawn = shown.result.circuit;
    if (shown) this.source = shown;
    this.benchRow.hidden = this.bench.bench === null;
    // a variant that was kept here may go again; those of the run stay
    this.removeButton.hidden = selected.kind !== 'variant' || selected.result?.sound !== undefined;
    this.redraw();
  }

  /** The variant whose circuit is drawn. */
  get shown(): VariantResult | null {
    return this.source?.result ?? null;
  }

  showFault(texts: readonly string[]): void {
    this.fault.textContent = texts.join(' ');
    // what was drawn ahead of the answer is not so
    this.drawn = this.source?.result?.circuit ?? this.drawn;
    this.redraw();
  }

  private redraw(): void {
    const { drawn, source } = this;
    if (!drawn || !source) return;
    const held = document.activeElement instanceof Element ? document.activeElement.getAttribute('data-key') : null;
    const row = source.result ? rowAt(source.result, this.markedHertz) : null;
    const most = row ? costliest(row.cost) : null;
    const at = this.markedHertz < 1000 ? `${this.markedHertz} Hz` : `${this.markedHertz / 1000} kHz`;
    this.which.textContent = source.name;
    this.costs.textContent =
      most && most.decibels >= 0.1
        ? `Framed: the ${most.name} costs most at ${at}, ${most.decibels.toFixed(1)} dB.`
        : `No part costs a tenth of a decibel at ${at}.`;
    const mark = most && most.decibels >= 0.1 ? { part: most.key } : null;
    const svg = drawing(circuitDrawing(drawn, `Circuit of ${source.name}`, mark));
    this.holder.replaceChildren(svg);
    const onDrawing = new Set([...svg.querySelectorAll('[data-key]')].map((one) => one.getAttribute('data-key')));
    const rest = partValues(drawn).filter(({ key }) => !onDrawing.has(key));
    this.more.replaceChildren(...rest.map((part) => this.listed(part, drawn)));
    if (held) this.control(held)?.focus();
  }

  /** A value with no place on the drawing. */
  private listed(part: PartValue, drawn: CircuitRecord): HTMLElement {
    const text = valueText(drawn, part);
    return element(
      'div',
      {},
      element('span', { 'aria-hidden': 'true' }, part.label),
      element(
        'span',
        {
          class: 'value',
          role: 'spinbutton',
          tabindex: '0',
          'data-key': part.key,
          'aria-label': part.label,
          'aria-valuenow': `${Number.parseFloat(text) || 0}`,
          'aria-valuetext': text,
        },
        text,
      ),
    );
  }

  private control(key: string): SVGElement | HTMLElement | null {
    return this.root.querySelector<HTMLElement>(`[data-key="${CSS.escape(key)}"]`);
  }

  private listen(holder: HTMLElement): void {
    const partOf = (event: Event): PartValue | null => {
      const key = event.target instanceof Element ? event.target.closest('[data-key]')?.getAttribute('data-key') : null;
      return key && this.drawn ? (partValues(this.drawn).find((one) => one.key === key) ?? null) : null;
    };
    holder.addEventListener('keydown', (event) => {
      const part = partOf(event);
      if (part && this.press(part, event)) event.preventDefault();
    });
    holder.addEventListener('click', (event) => {
      const part = partOf(event);
      if (part) this.openForm(part, null);
    });
  }

  /** Whether the key meant something to the value. */
  private press(part: PartValue, { key, ctrlKey, metaKey, altKey }: KeyboardEvent): boolean {
    if (ctrlKey || metaKey || altKey) return false;
    const steps = { ArrowUp: 1, ArrowRight: 1, ArrowDown: -1, ArrowLeft: -1 }[key];
    const decades = { PageUp: DECADE_STEPS, PageDown: -DECADE_STEPS }[key];
    if (steps !== undefined || decades !== undefined) this.step(part, (steps ?? decades) as number);
    else if (key === 'Enter' || key === 'F2') this.openForm(part, null);
    else if (key === 'Delete' && part.absent !== null) this.set(part, part.absent);
    else if (/^[0-9.]$/.test(key)) this.openForm(part, key);
    else return false;
    return true;
  }

  private step(part: PartValue, steps: number): void {
    const { drawn } = this;
    if (!drawn) return;
    const text = steppedText(drawn, part, steps);
    if (text !== null) this.set(part, text);
  }

  /** Writes a value into the list: it becomes the circuit on the bench. */
  private set(part: PartValue, text: string): void {
    const { source } = this;
    if (!source || this.bench.selected.kind === 'sent' || this.testing) return;
    this.fault.textContent = '';
    this.bench.change(source, { [part.key]: text });
    const reading = readQuantity(text, part.kind, part.key);
    if (/^none$/i.test(text)) this.foresee(part.path, null);
    else if ('value' in reading) this.foresee(part.path, reading.value);
  }

  /** Shows a value before its figures have come, so that the next step starts from it. */
  private foresee(part: readonly string[], value: number | null): void {
    if (!this.drawn) return;
    this.drawn = replaced(this.drawn, part, value) as CircuitRecord;
    this.redraw();
  }

  private hintLine(): void {
    this.lineValue.placeholder = OTHER_LINES.find(([key]) => key === this.line.value)?.[1] ?? '';
  }

  private setLine(): void {
    const text = this.lineValue.value.trim();
    const { source } = this;
    if (!source || text === '' || this.bench.selected.kind === 'sent' || this.testing) return;
    this.fault.textContent = '';
    this.bench.change(source, { [this.line.value]: text });
  }

  private get testing(): boolean {
    return document.body.dataset.testing === 'yes';
  }

  private openForm(part: PartValue, first: string | null): void {
    if (!this.drawn) return;
    this.key = part.key;
    this.inputLabel.textContent = part.label;
    this.absentButton.hidden = part.absent === null;
    const text = valueText(this.drawn, part);
    this.input.value = first ?? (text === 'absent' ? '' : text);
    this.form.hidden = false;
    this.fault.textContent = '';
    this.input.focus();
    if (first === null) this.input.select();
  }

  private closeForm(): void {
    this.form.hidden = true;
    this.control(this.key)?.focus();
  }

  private get typedPart(): PartValue | null {
    return this.drawn ? (partValues(this.drawn).find(({ key }) => key === this.key) ?? null) : null;
  }

  private commitTyped(): void {
    const part = this.typedPart;
    const text = this.input.value.trim();
    this.form.hidden = true;
    if (part && text !== '') this.set(part, /^absent$/i.test(text) && part.absent !== null ? part.absent : text);
    this.control(this.key)?.focus();
  }

  private stepTyped(steps: number): void {
    const part = this.typedPart;
    if (!part) return;
    this.step(part, steps);
    if (this.drawn) this.input.value = valueText(this.drawn, part);
  }

  private setAbsent(): void {
    const part = this.typedPart;
    this.form.hidden = true;
    if (part?.absent) this.set(part, part.absent);
    this.control(this.key)?.focus();
  }

  private keep(): void {
    const name = this.nameInput.value.trim();
    const taken = this.bench.variants.some((one) => one.name.toLowerCase() === name.toLowerCase());
    if (name === '' || taken) {
      this.fault.textContent = name === '' ? 'Give the variant a name.' : `There is already a variant ‘${name}’.`;
      this.nameInput.focus();
    } else if (this.bench.variants.length >= MOST_VARIANTS) {
      this.fault.textContent = `There are already ${MOST_VARIANTS} variants: remove one first.`;
    } else if (!this.bench.bench?.result) {
      this.fault.textContent = 'Its figures are not ready yet.';
    } else {
      this.nameInput.value = '';
      this.fault.textContent = '';
      this.bench.keep(name);
    }
  }
}

/** A copy of a record with one value deep in it replaced. */
function replaced(record: unknown, path: readonly string[], value: number | null): unknown {
  const [name, ...rest] = path;
  if (name === undefined) return value;
  const own = (typeof record === 'object' && record !== null ? record : {}) as Record<string, unknown>;
  return { ...own, [name]: replaced(own[name], rest, value) };
}
