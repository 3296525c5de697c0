/**
 * A name or comment as one plain line: composed letters (NFC), control characters, line ends and marks that turn the
 * reading direction or show nothing replaced by a space, broken halves of characters by U+FFFD, runs of space by one.
 *
 * Whatever shows a name starts from this, so that no name can add a row, hide text or break a file's syntax there.
 */
export function onePlainLine(text: string): string {
  return text
    .normalize('NFC')
    .replace(/\p{Cs}/gu, '\ufffd')
    .replace(/[\p{Cc}\p{Cf}\p{Zl}\p{Zp}\p{Noncharacter_Code_Point}]/gu, ' ')
    .replace(/\s+/gu, ' ')
    .trim();
}
