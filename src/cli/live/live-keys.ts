/** What a key does while listening. */
export type LiveKey =
  | { readonly kind: 'variant'; readonly index: number }
  | { readonly kind: 'part'; readonly by: 1 | -1 }
  | { readonly kind: 'step'; readonly by: 1 | -1 }
  | { readonly kind: 'pause' | 'match' | 'write' | 'quit' };

/** Arrows begin with it. */
const ESCAPE = String.fromCharCode(27);

/** Keys in what a terminal sent at once; what means nothing is left out. */
export function liveKeys(sent: string): LiveKey[] {
  const keys: LiveKey[] = [];
  for (let at = 0; at < sent.length; ) {
    const arrow = sent.charAt(at) === ESCAPE ? /^[[O]([ABCD])/.exec(sent.slice(at + 1)) : null;
    if (arrow) {
      keys.push(ARROWS[arrow[1] as 'A' | 'B' | 'C' | 'D']);
      at += 1 + arrow[0].length;
      continue;
    }
    const key = letterKey(sent.charAt(at));
    if (key) keys.push(key);
    at++;
  }
  return keys;
}

const ARROWS: Readonly<Record<'A' | 'B' | 'C' | 'D', LiveKey>> = {
  A: { kind: 'step', by: 1 },
  B: { kind: 'step', by: -1 },
  C: { kind: 'part', by: 1 },
  D: { kind: 'part', by: -1 },
};

function letterKey(letter: string): LiveKey | null {
  if (/^[1-9]$/.test(letter)) return { kind: 'variant', index: Number(letter) - 1 };
  switch (letter.toLowerCase()) {
    case ' ':
      return { kind: 'pause' };
    case 'l':
      return { kind: 'match' };
    case 'w':
      return { kind: 'write' };
    case 'q':
    case '\u0003':
      return { kind: 'quit' };
    default:
      return null;
  }
}
