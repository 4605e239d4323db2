import { useState } from 'react';
import { say } from '../notice.ts';
import { writeAddress } from './address.ts';

/** How long the button says that it has copied, milliseconds. */
const SAID = 2000;

/** Copies a link that holds the whole design. */
export function CopyLink() {
  const [copied, setCopied] = useState(false);
  const copy = async () => {
    const address = await writeAddress();
    try {
      await navigator.clipboard.writeText(address);
      setCopied(true);
      setTimeout(() => setCopied(false), SAID);
    } catch {
      // The clipboard is barred, or the page is not on a secure address.
      say('The browser does not let the page copy. The link is in the address bar: copy it there.');
    }
  };
  return (
    <button type="button" className="link copy-link" onClick={() => void copy()}>
      <span aria-live="polite">{copied ? 'Copied' : 'Copy link'}</span>
    </button>
  );
}
