import { escapeXml, px } from '../results/svg-text.ts';

/** A point of the drawing. */
export type Point = readonly [x: number, y: number];

/** A line through points. */
export function wire(...points: readonly Point[]): string {
  return `<path d="M${points.map(([x, y]) => `${px(x)} ${px(y)}`).join('L')}"/>`;
}

/** A joint of wires. */
export function joint([x, y]: Point): string {
  return `<circle class="dot" cx="${px(x)}" cy="${px(y)}" r="3.2"/>`;
}

/** A terminal. */
export function terminal([x, y]: Point): string {
  return `<circle class="paper" cx="${px(x)}" cy="${px(y)}" r="4"/>`;
}

/** Chassis: three shrinking lines below a point. */
export function chassis([x, y]: Point): string {
  return [9, 6, 3].map((half, k) => wire([x - half, y + 4 * k], [x + half, y + 4 * k])).join('');
}

/** A part between two points on one vertical or horizontal: its leads, then its body in the middle. */
function between(a: Point, b: Point, half: number, body: (middle: Point, along: Point) => string): string {
  const middle: Point = [(a[0] + b[0]) / 2, (a[1] + b[1]) / 2];
  const length = Math.hypot(b[0] - a[0], b[1] - a[1]);
  const along: Point = [(b[0] - a[0]) / length, (b[1] - a[1]) / length];
  const end = (sign: number): Point => [middle[0] + sign * half * along[0], middle[1] + sign * half * along[1]];
  return wire(a, end(-1)) + wire(end(1), b) + body(middle, along);
}

/** Resistor, IEC 60617 (the rectangle). */
export function resistor(a: Point, b: Point): string {
  return between(a, b, 19, ([x, y], [dx]) => {
    const [w, h] = dx === 0 ? [14, 38] : [38, 14];
    return `<rect class="paper" x="${px(x - w / 2)}" y="${px(y - h / 2)}" width="${w}" height="${h}"/>`;
  });
}

/** Capacitor, IEC 60617; `variable` adds the arrow of a tuning capacitor. */
export function capacitor(a: Point, b: Point, variable = false): string {
  return between(a, b, 4, ([x, y], [dx, dy]) => {
    const plate = (sign: number): string => {
      const [cx, cy] = [x + 4 * sign * dx, y + 4 * sign * dy];
      return `<path class="heavy" d="M${px(cx - 13 * dy)} ${px(cy - 13 * dx)}L${px(cx + 13 * dy)} ${px(cy + 13 * dx)}"/>`;
    };
    const arrow = variable
      ? wire([x - 17, y + 17], [x + 17, y - 17]) + wire([x + 9, y - 17], [x + 17, y - 17], [x + 17, y - 9])
      : '';
    return plate(-1) + plate(1) + arrow;
  });
}

/** Coil, IEC 60617 (four half circles), bulging to one side. */
export function coil(a: Point, b: Point, side: 1 | -1 = 1): string {
  return between(a, b, 28, ([x, y], [dx, dy]) => {
    const from: Point = [x - 28 * dx, y - 28 * dy];
    const turns = Array.from({ length: 4 }, () => `a7 7 0 0 ${side === 1 ? 1 : 0} ${px(14 * dx)} ${px(14 * dy)}`);
    return `<path d="M${px(from[0])} ${px(from[1])}${turns.join('')}"/>`;
  });
}

/** Diode or crystal that lets current from the first point to the second. */
export function diode(a: Point, b: Point): string {
  return between(a, b, 9, ([x, y]) => {
    const triangle = `<path class="paper" d="M${px(x - 9)} ${px(y - 10)}v20l18 -10z"/>`;
    return `${triangle}<path class="heavy" d="M${px(x + 9)} ${px(y - 11)}v22"/>`;
  });
}

/** Battery of two cells, its plus at the first point. */
export function battery(a: Point, b: Point): string {
  return between(a, b, 9, ([x, y]) => {
    const bar = (at: number, half: number, name: string): string =>
      `<path class="${name}" d="M${px(x + at)} ${px(y - half)}v${2 * half}"/>`;
    return bar(-9, 14, 'thin') + bar(-3, 7, 'heavy') + bar(3, 14, 'thin') + bar(9, 7, 'heavy');
  });
}

/** Two lines of an iron core beside a vertical winding. */
export function core(x: number, middle: number): string {
  return wire([x - 2.5, middle - 30], [x - 2.5, middle + 30]) + wire([x + 2.5, middle - 30], [x + 2.5, middle + 30]);
}

/** Phones between two points of one vertical: two earpieces and their headband. */
export function phones(a: Point, b: Point): string {
  return between(a, b, 24, ([x, y]) => {
    const ear = (cy: number): string =>
      `<path class="paper" d="M${px(x)} ${px(cy - 9)}h8a9 9 0 0 1 0 18h-8z"/>` +
      `<path class="heavy" d="M${px(x - 3)} ${px(cy - 10)}v20"/>`;
    return `${ear(y - 12)}${ear(y + 12)}${wire([x, y - 24], [x, y - 21])}${wire([x, y + 21], [x, y + 24])}`;
  });
}

/** Aerial above a point. */
export function aerial([x, y]: Point): string {
  return wire([x, y], [x, y - 34]) + wire([x - 12, y - 34], [x, y - 16], [x + 12, y - 34]);
}

/** Triode: envelope, plate, grid, cathode; its pins are 42 px from the middle. */
export function triode([x, y]: Point): string {
  return [
    `<circle class="paper" cx="${px(x)}" cy="${px(y)}" r="40"/>`,
    wire([x, y - 60], [x, y - 22]),
    `<path class="heavy" d="M${px(x - 18)} ${px(y - 22)}h36"/>`,
    `<path d="M${px(x - 40)} ${px(y)}h20m4 0h8m6 0h8m6 0h8"/>`,
    `<path class="heavy" d="M${px(x - 18)} ${px(y + 26)}v-4a4 4 0 0 1 4 -4h28a4 4 0 0 1 4 4v4"/>`,
    wire([x - 18, y + 26], [x - 18, y + 60]),
  ].join('');
}

/** A text that is no control. */
export function label([x, y]: Point, text: string, anchor: 'start' | 'middle' | 'end' = 'start'): string {
  return `<text x="${px(x)}" y="${px(y)}" text-anchor="${anchor}">${escapeXml(text)}</text>`;
}
