import type { PageData } from './page-data.ts';

/** The page's program and looks, as texts. */
export interface PageScripts {
  /** Runs in the page itself. */
  readonly client: string;
  /** The engine, in a worker: base64 of the script packed by gzip (RFC 1952). */
  readonly worker: string;
  /** The player, on the audio thread. */
  readonly player: string;
  readonly style: string;
}

/** A page taken apart: what never changes, and the policy that names it. */
export interface PageParts extends PageScripts {
  /** Content security policy: only the script and the style of these hashes, nothing from anywhere. */
  readonly policy: string;
}

/** Base64 SHA-256 of a text, from whoever calls: the rings inside have no such function. */
export type Sha256 = (text: string) => string;

/**
 * The policy of a page with these scripts. The engine's worker is started from the page's own text (blob:), and so is the
 * player, which browsers take for pages on disk only from an address that is the text itself (data:). The engine's loop is
 * WebAssembly from its own text.
 */
export function policyFor(scripts: PageScripts, sha256: Sha256): string {
  return [
    "default-src 'none'",
    `script-src 'sha256-${sha256(scripts.client)}' data: 'wasm-unsafe-eval'`,
    'worker-src blob:',
    `style-src 'sha256-${sha256(scripts.style)}'`,
    // the empty icon below, so that a published page asks its server for none
    'img-src data:',
    "base-uri 'none'",
    "form-action 'none'",
  ].join('; ');
}

/**
 * The whole page as one HTML text. Everything that comes from the list or the clip stands in the data alone, and the
 * program shows it as text.
 */
export function pageText(parts: PageParts, data: PageData): string {
  const title = data.name === '' ? 'Listening page' : `${data.name}: listening page`;
  return `<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${escapeHtml(parts.policy)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<meta name="referrer" content="no-referrer">
<title>${escapeHtml(title)}</title>
<link rel="icon" href="data:,">
<style>${parts.style}</style>
</head>
<body>
<main id="page"><noscript><p>This page plays and draws by a script of its own, which this browser has switched off.</p></noscript></main>
<script type="application/json" id="page-data">${inScript(JSON.stringify(data))}</script>
<script type="text/plain" id="page-worker">${parts.worker}</script>
<script type="text/plain" id="page-player">${parts.player}</script>
<script id="page-client">${parts.client}</script>
</body>
</html>
`;
}

/** JSON that may stand in a script element: no text in it can end the element or open a comment. */
function inScript(json: string): string {
  return json.replaceAll('<', '\\u003c').replaceAll('\u2028', '\\u2028').replaceAll('\u2029', '\\u2029');
}

/** Text as it may stand in HTML, in an element or a quoted attribute. */
export function escapeHtml(text: string): string {
  return text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;');
}
