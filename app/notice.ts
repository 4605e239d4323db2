/** One sentence the page has to say about a link or a file; it stays until it is put away. */
import { create } from 'zustand';

/** The sentence, or null. */
export const useNotice = create<{ readonly message: string | null }>(() => ({ message: null }));

/** Say a sentence, in place of the one before; null puts it away. */
export function say(message: string | null): void {
  useNotice.setState({ message });
}
