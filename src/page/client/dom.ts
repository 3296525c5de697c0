/** Attributes of an element; `text` becomes its text, never markup. */
export type Attributes = Readonly<Record<string, string>>;

/** An element with attributes and children; strings become text. */
export function element<Tag extends keyof HTMLElementTagNameMap>(
  tag: Tag,
  attributes: Attributes = {},
  ...children: readonly (Node | string)[]
): HTMLElementTagNameMap[Tag] {
  const made = document.createElement(tag);
  for (const [name, value] of Object.entries(attributes)) made.setAttribute(name, value);
  made.append(...children);
  return made;
}

/** A section of the page with its heading. */
export function section(id: string, title: string, ...children: readonly (Node | string)[]): HTMLElement {
  return element(
    'section',
    { id, 'aria-labelledby': `${id}-title` },
    element('h2', { id: `${id}-title` }, title),
    ...children,
  );
}

export function button(label: string, onClick: () => void, attributes: Attributes = {}): HTMLButtonElement {
  const made = element('button', { type: 'button', ...attributes }, label);
  made.addEventListener('click', onClick);
  return made;
}

/** A drawing from a text that was escaped where it was made. */
export function drawing(svg: string): SVGSVGElement {
  const holder = document.createElement('div');
  holder.innerHTML = svg;
  return holder.firstElementChild as SVGSVGElement;
}

/** A table: heads, then rows whose first cell heads the row. */
export function table(caption: string, heads: readonly string[], rows: readonly (readonly string[])[]): HTMLElement {
  const cell = (text: string, k: number): HTMLElement =>
    k === 0 ? element('th', { scope: 'row' }, text) : element('td', {}, text);
  const made = element(
    'table',
    {},
    element('caption', {}, caption),
    element('thead', {}, element('tr', {}, ...heads.map((head) => element('th', { scope: 'col' }, head)))),
    element('tbody', {}, ...rows.map((row) => element('tr', {}, ...row.map(cell)))),
  );
  // wide tables scroll by themselves, and can be reached by keyboard for that
  return element('div', { class: 'wide', tabindex: '0', role: 'region', 'aria-label': caption }, made);
}

/** Hands a file to the browser's own saving. */
export function saveFile(name: string, contents: string | Uint8Array<ArrayBuffer>, type: string): void {
  const address = URL.createObjectURL(new Blob([contents], { type }));
  const link = element('a', { href: address, download: name });
  link.click();
  // the browser has taken it by then; the memory is given back
  setTimeout(() => URL.revokeObjectURL(address), 60_000);
}
