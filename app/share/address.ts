/** The address bar and the document: a link opens its design, and every change is in the link. */
import { decodeLink, encodeLink } from '../document/link.ts';
import { useDocument } from '../document/store.ts';
import { say } from '../notice.ts';

/** Rest between the last change and the new address, milliseconds. */
const REST = 300;

/** Open the design of the address, if it has one; a link that cannot be read is said, not opened. */
async function readAddress(): Promise<void> {
  const { hash } = location;
  if (hash.length < 2) return;
  const outcome = await decodeLink(hash);
  // Another address may have come while this one was being read.
  if (location.hash !== hash) return;
  if (!outcome.ok) {
    say(`${outcome.problem.message} The page stays as it was.`);
    return;
  }
  say(null);
  useDocument.getState().begin(outcome.value);
}

/** The full address of the page with the present design in it, put into the address bar as well. */
export async function writeAddress(): Promise<string> {
  const { design } = useDocument.getState();
  const hash = await encodeLink(design);
  // A design that changed meanwhile is written by the change after it.
  if (useDocument.getState().design === design && location.hash !== hash) {
    history.replaceState(null, '', hash);
  }
  return location.href.replace(/#.*$/s, '') + hash;
}

/** Read the address, then keep it and the document together for as long as the page is open. */
export async function openAddress(): Promise<void> {
  await readAddress();
  let rest: ReturnType<typeof setTimeout> | undefined;
  useDocument.subscribe((state, before) => {
    if (state.design === before.design) return;
    clearTimeout(rest);
    rest = setTimeout(() => void writeAddress(), REST);
  });
  addEventListener('hashchange', () => void readAddress());
}
