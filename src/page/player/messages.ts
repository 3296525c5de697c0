/** Name under which the player is registered on the audio thread. */
export const PLAYER = 'presolder-player';

/** What the page tells the player; frames count at the clip's rate. */
export type ToPlayer =
  | {
      readonly kind: 'load';
      readonly name: string;
      readonly from: number;
      readonly length: number;
      readonly gain: number;
    }
  | { readonly kind: 'fill'; readonly name: string; readonly samples: Float32Array }
  | { readonly kind: 'drop'; readonly name: string }
  | { readonly kind: 'level'; readonly name: string; readonly gain: number }
  | { readonly kind: 'select'; readonly name: string | null }
  | { readonly kind: 'play' }
  | { readonly kind: 'pause' }
  | { readonly kind: 'seek'; readonly position: number }
  | { readonly kind: 'loop'; readonly loop: { readonly from: number; readonly to: number } | null };
