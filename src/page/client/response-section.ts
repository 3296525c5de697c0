import { THIRD_OCTAVE_NOMINAL_HERTZ } from '../../engine/parts/third-octaves.ts';
import { COST_PARTS } from '../../results/cost-parts.ts';
import type { MeasuredRecord, VariantResult } from '../../results/result.ts';
import { readTwoColumns } from '../../results/two-columns.ts';
import { rowAt } from '../in-words.ts';
import { hertzAt, lineClass, responseDrawing } from '../response-drawing.ts';
import { drawing, element, section, table } from './dom.ts';
import { faultTexts } from './fault-texts.ts';

/** Narrowest and widest drawing, px: letters keep their size. */
const WIDTHS = [300, 860] as const;

const spoken = (hertz: number): string => (hertz < 1000 ? `${hertz} Hz` : `${hertz / 1000} kHz`);
const decibels = (value: number | undefined): string =>
  value === undefined ? '–' : `${value < -0.05 ? '−' : ''}${Math.abs(value).toFixed(1)}`;

/** The responses, the selected variant's cost by part, the readout and the table. */
export class ResponseSection {
  readonly root: HTMLElement;
  markedHertz = 5000;
  measured: MeasuredRecord | null;
  private variants: readonly VariantResult[] = [];
  private selected = 0;
  /** What was shown last: the same is not drawn again. */
  private last: readonly unknown[] = [];
  private readonly onMark: () => void;
  private readonly holder = element('div', { class: 'drawn' });
  private readonly legend = element('ul', { class: 'legend', 'aria-label': 'Curves' });
  private readonly costLegend = element('ul', { class: 'legend', 'aria-label': 'Cost of each part' });
  private readonly readout = element('output', { class: 'readout', id: 'readout', for: 'marked' });
  private readonly tables = element('div', { class: 'side-by-side' });
  private readonly marked: HTMLInputElement;
  private readonly unit: HTMLSelectElement;
  private readonly fault = element('p', { class: 'fault', role: 'alert' });

  constructor(measured: MeasuredRecord | null, onMark: () => void) {
    this.measured = measured;
    this.onMark = onMark;
    this.marked = element('input', {
      type: 'range',
      id: 'marked',
      min: '0',
      max: `${THIRD_OCTAVE_NOMINAL_HERTZ.length - 1}`,
      step: '1',
    });
    this.marked.addEventListener('input', () =>
      this.mark(THIRD_OCTAVE_NOMINAL_HERTZ[Number(this.marked.value)] ?? 5000),
    );
    this.unit = element(
      'select',
      { id: 'unit' },
      element('option', { value: 'decibels' }, 'dB re 400 Hz'),
      element('option', { value: 'volts' }, 'volts at 30 % modulation'),
    );
    this.unit.addEventListener('change', () => this.draw());
    const file = element('input', { type: 'file', id: 'measured', accept: '.csv,.txt,.tsv,text/*' });
    file.addEventListener('change', () => {
      const chosen = file.files?.[0];
      if (chosen) this.readMeasured(chosen).catch((fault: unknown) => this.tell(faultTexts(fault)));
    });
    this.root = section(
      'response',
      'Response',
      element(
        'div',
        { class: 'row screen' },
        element('label', { for: 'unit' }, 'Shown in'),
        this.unit,
        element('label', { for: 'marked' }, 'Marked frequency'),
        this.marked,
      ),
      this.readout,
      this.legend,
      this.holder,
      this.costLegend,
      this.tables,
      element(
        'div',
        { class: 'row screen' },
        element('label', { for: 'measured' }, 'Measured curve (two columns: Hz and dB or V)'),
        file,
      ),
      this.fault,
    );
    const follow = (event: PointerEvent): void => {
      const box = this.holder.getBoundingClientRect();
      const hertz = hertzAt(((event.clientX - box.left) / box.width) * this.width, this.width);
      this.mark(nearest(hertz));
    };
    this.holder.addEventListener('pointermove', follow);
    this.holder.addEventListener('pointerdown', follow);
    new ResizeObserver(() => this.draw()).observe(this.holder);
  }

  /** Shows these variants, the selected one's cost below. */
  refresh(variants: readonly VariantResult[], selected: number): void {
    const now = [variants, selected, this.markedHertz, this.measured];
    if (now.every((one, k) => one === this.last[k])) return;
    this.last = now;
    this.variants = variants;
    this.selected = selected;
    this.draw();
    this.legend.replaceChildren(
      ...variants.map((variant, k) => legendItem(lineClass(k), `${k + 1}`, variant.name)),
      ...(this.measured ? [legendItem('measured', '', `measured: ${this.measured.file}`)] : []),
    );
    this.costLegend.replaceChildren(...COST_PARTS.map(({ name }, k) => legendItem(`cost-${k + 1}`, '', name)));
    this.tables.replaceChildren(
      table(
        'Response, dB re 400 Hz',
        ['Hz', ...variants.map(({ name }) => name)],
        THIRD_OCTAVE_NOMINAL_HERTZ.map((hertz) => [
          `${hertz}`,
          ...variants.map((variant) => decibels(rowAt(variant, hertz)?.decibels)),
        ]),
      ),
      table(
        `Cost by part at ${spoken(this.markedHertz)}, dB that would come back if that part alone were ideal`,
        ['part', ...variants.map(({ name }) => name)],
        COST_PARTS.map(({ key, name }) => [
          name,
          ...variants.map((variant) => decibels(rowAt(variant, this.markedHertz)?.cost[key])),
        ]),
      ),
    );
  }

  private mark(hertz: number): void {
    if (hertz === this.markedHertz) return;
    this.markedHertz = hertz;
    this.onMark();
  }

  private get width(): number {
    const [least, most] = WIDTHS;
    return Math.max(least, Math.min(most, Math.round(this.holder.clientWidth) || 720));
  }

  private draw(): void {
    const { variants, selected, markedHertz, measured, width } = this;
    if (variants.length === 0) return;
    const unit = this.unit.value === 'volts' ? 'volts' : 'decibels';
    const svg = responseDrawing({ variants, selected, unit, markedHertz, measured, width });
    this.holder.replaceChildren(drawing(svg));
    this.marked.value = `${THIRD_OCTAVE_NOMINAL_HERTZ.indexOf(markedHertz as (typeof THIRD_OCTAVE_NOMINAL_HERTZ)[number])}`;
    this.marked.setAttribute('aria-valuetext', spoken(markedHertz));
    this.readout.textContent = `${spoken(markedHertz)}: ${variants
      .map((variant, k) => {
        const row = rowAt(variant, markedHertz);
        const figure = unit === 'volts' ? millivolts(row?.voltsRmsAt30Percent) : `${decibels(row?.decibels)} dB`;
        return `${k + 1} ${figure}`;
      })
      .join('   ')}`;
  }

  private async readMeasured(file: File): Promise<void> {
    const columns = readTwoColumns(await file.text(), file.name);
    const level = (value: number): number => (columns.unit === 'volts' ? 20 * Math.log10(value) : value);
    const all = columns.hertz.map((hertz, k) => ({ hertz, decibels: level(columns.values[k] as number) }));
    const reference = all.reduce((best, point) =>
      Math.abs(Math.log(point.hertz / 400)) < Math.abs(Math.log(best.hertz / 400)) ? point : best,
    ).decibels;
    this.measured = {
      file: file.name,
      points: all.map(({ hertz, decibels: own }) => ({ hertz, decibels: own - reference })),
    };
    this.tell([]);
    this.refresh(this.variants, this.selected);
  }

  private tell(texts: readonly string[]): void {
    this.fault.textContent = texts.join(' ');
  }
}

function nearest(hertz: number): number {
  return THIRD_OCTAVE_NOMINAL_HERTZ.reduce((best, one) =>
    Math.abs(Math.log(one / hertz)) < Math.abs(Math.log(best / hertz)) ? one : best,
  );
}

function legendItem(name: string, tag: string, text: string): HTMLElement {
  const sample =
    name === 'measured'
      ? '<circle class="measured" cx="22" cy="6" r="3.4"/>'
      : `<path class="curve ${name}" d="M2 6H42"/>`;
  const picture = element('span', { class: 'sample', 'aria-hidden': 'true' });
  picture.append(drawing(`<svg viewBox="0 0 44 12">${sample}</svg>`));
  return element('li', {}, picture, tag === '' ? text : `${tag} ${text}`);
}

function millivolts(volts: number | undefined): string {
  if (volts === undefined) return '–';
  return volts >= 1 ? `${volts.toPrecision(3)} V` : `${(volts * 1000).toPrecision(3)} mV`;
}
