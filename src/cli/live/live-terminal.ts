/** Keys from a person, and whether there is one. */
export interface LiveTerminal {
  readonly isTerminal: boolean;
  /** Told what was typed, as it is typed. */
  listen(onKeys: (sent: string) => void): void;
  close(): void;
}

/** The terminal this program runs in; keys come one by one, without Enter. */
export function liveTerminal(): LiveTerminal {
  const { stdin } = process;
  return {
    isTerminal: stdin.isTTY === true,
    listen(onKeys) {
      stdin.setRawMode(true);
      stdin.setEncoding('utf8');
      stdin.on('data', (sent) => onKeys(String(sent)));
      stdin.resume();
    },
    close() {
      if (stdin.isTTY) stdin.setRawMode(false);
      stdin.removeAllListeners('data');
      stdin.pause();
    },
  };
}
