/** Why the last turn or typed value of the drive line was refused; the line has one place for it. */
import { create } from 'zustand';

/** The sentence, or null. */
export const useRefusal = create<{ readonly message: string | null }>(() => ({ message: null }));

/** Id of the element that shows it, for the field that it describes. */
export const REFUSAL_ID = 'drive-refusal';

/** Show why a value was refused; null takes the sentence away. */
export function refuse(message: string | null): void {
  if (useRefusal.getState().message !== message) useRefusal.setState({ message });
}
