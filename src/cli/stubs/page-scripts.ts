import type { PageScripts } from '../../page/page-text.ts';

/** The listening page's program. The build puts it here; a run from source has none and writes no page. */
export const PAGE_SCRIPTS: PageScripts | null = null;
