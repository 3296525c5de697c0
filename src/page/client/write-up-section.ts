import { responseCsv } from '../../results/response-csv.ts';
import { responseMarkdown } from '../../results/response-markdown.ts';
import type { Result } from '../../results/result.ts';
import { safeFileNames } from '../../results/safe-names.ts';
import type { Bench, Heard } from './bench.ts';
import { button, element, saveFile, section } from './dom.ts';

/** What the section asks the rest of the page for. */
export interface WriteUpSource {
  result(): Result;
  pageText(): string;
  partsList(): string;
  /** The WAV file of a variant. */
  wav(variant: Heard, onBytes: (bytes: Uint8Array<ArrayBuffer>) => void): void;
}

/** Notes and everything that leaves the page. */
export class WriteUpSection {
  readonly root: HTMLElement;
  readonly notes: HTMLTextAreaElement;
  private readonly bench: Bench;
  private readonly source: WriteUpSource;
  private readonly sounds = element('div', { class: 'choices' });
  private readonly printed = element('div', { class: 'printed-notes' });
  private readonly said = element('p', { class: 'note', role: 'status' });

  constructor(bench: Bench, notes: string, name: string, source: WriteUpSource) {
    this.bench = bench;
    this.source = source;
    this.notes = element('textarea', { id: 'notes', rows: '6' });
    this.notes.value = notes;
    this.printed.textContent = notes;
    this.notes.addEventListener('input', () => {
      this.printed.textContent = this.notes.value;
    });
    const stem = safeFileNames([name === '' ? 'page' : name])[0] as string;
    this.root = section(
      'write-up',
      'For the write-up',
      element('label', { for: 'notes', class: 'screen' }, 'Notes, kept in the saved page'),
      this.notes,
      this.printed,
      element(
        'div',
        { class: 'choices screen' },
        button('Save this page', () => saveFile(`${stem}.html`, source.pageText(), 'text/html'), { id: 'save-page' }),
        button('Table as Markdown', () => saveFile('response.md', responseMarkdown(source.result()), 'text/markdown'), {
          id: 'save-markdown',
        }),
        button('Table as CSV', () => saveFile('response.csv', responseCsv(source.result()), 'text/csv'), {
          id: 'save-csv',
        }),
        button('Parts list as YAML', () => saveFile(`${stem}.yaml`, source.partsList(), 'text/yaml'), {
          id: 'save-list',
        }),
        button('Print', () => window.print(), { id: 'print' }),
      ),
      this.sounds,
      this.said,
    );
    this.sounds.classList.add('screen');
  }

  refresh(): void {
    const { variants } = this.bench;
    const stems = safeFileNames(variants.map(({ name }) => name));
    const held = this.sounds.contains(document.activeElement) ? document.activeElement?.id : undefined;
    this.sounds.replaceChildren(
      ...variants.map((variant, k) =>
        button(`WAV: ${variant.name}`, () => this.saveWav(variant, `${stems[k]}.wav`), { id: `save-wav-${k + 1}` }),
      ),
    );
    if (held) document.getElementById(held)?.focus();
  }

  private saveWav(variant: Heard, file: string): void {
    this.said.textContent = `Rendering ${file} …`;
    this.source.wav(variant, (bytes) => {
      this.said.textContent = '';
      saveFile(file, bytes, 'audio/wav');
    });
  }
}
