import { InputError } from '../engine/errors.ts';

/** Does a piece of work on one variant; what is wrong with its circuit as a whole is told with the variant's name. */
export function ofVariant<Done>(name: string, work: () => Done): Done {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    throw new InputError(error.faults.map((fault) => ({ ...fault, where: `${JSON.stringify(name)}, ${fault.where}` })));
  }
}
