/** A caution of a run, with the variants it concerns; none named: all of them. */
export interface GatheredCaution {
  readonly text: string;
  readonly names: readonly string[];
  /** Variants that have the same caution with figures of their own. */
  readonly also: readonly string[];
}

/** What variants have been told, each matter once: in the words of the first that met it. */
export function gatherCautions(
  variants: readonly { readonly name: string; readonly cautions: readonly string[] }[],
): GatheredCaution[] {
  const matters = new Map<string, { text: string; names: string[]; also: string[] }>();
  for (const { name, cautions } of variants) {
    for (const text of cautions) {
      const matter = withoutFigures(text);
      const found = matters.get(matter);
      if (found === undefined) matters.set(matter, { text, names: [name], also: [] });
      else (found.text === text ? found.names : found.also).push(name);
    }
  }
  return [...matters.values()].map((matter) =>
    matter.names.length === variants.length ? { ...matter, names: [] } : matter,
  );
}

/** The sentence of a gathered caution, without the names it begins with. */
export function gatheredText({ text, also }: GatheredCaution): string {
  return `${text}${also.length === 0 ? '' : ` Likewise, with figures of their own: ${also.join(', ')}.`}`;
}

/** The sentence with its quantities taken out, so that the same matter is known again. */
function withoutFigures(text: string): string {
  return text.replace(/[-−+]?\d[\d.]*(?:e[-+]?\d+)?(?: [pnµmkMG]?(?:Hz|Ah|V|A|W|F|H|Ω)(?![a-z]))?/g, '#');
}
