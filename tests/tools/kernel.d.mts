/** Compiles the renderer's loop; the text of the source file that keeps its bytes. */
export function compileKernel(): Promise<string>;
