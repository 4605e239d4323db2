/** Keys that act on the design as a whole, wherever the focus is but in a text. */
import { useDocument } from './document/store.ts';

const isText = (target: EventTarget | null) =>
  target instanceof HTMLElement && target.closest('input, textarea, select') !== null;

/** Undo by Ctrl or Cmd with Z; redo with Shift as well, or by Y. A text field undoes its own typing. */
export function openShortcuts(): void {
  addEventListener('keydown', (event) => {
    if (!(event.ctrlKey || event.metaKey) || event.altKey || isText(event.target)) return;
    const key = event.key.toLowerCase();
    const { undo, redo } = useDocument.getState();
    if (key === 'z' && !event.shiftKey) undo();
    else if (key === 'y' || key === 'z') redo();
    else return;
    event.preventDefault();
  });
}
