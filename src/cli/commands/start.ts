import { starterList } from '../../list/starter.ts';
import { EXIT, type Io } from '../io.ts';
import { writeNewFile } from '../new-file.ts';

/** Writes the starter parts list; refuses to replace a file. */
export async function start(file: string, io: Io): Promise<number> {
  await writeNewFile(file, starterList());
  io.err(`Wrote ${file}. Next: presolder respond ${file}\n`);
  return EXIT.done;
}
