/** What anybody must know before touching such a supply. */
import { useRef, useState } from 'react';

const KEY = 'kilostack.cautions-read';

function wasRead(): boolean {
  try {
    return localStorage.getItem(KEY) !== null;
  } catch {
    return false;
  }
}

/** The cautions in full, behind a button. */
export function Cautions() {
  const dialog = useRef<HTMLDialogElement>(null);
  return (
    <>
      <button type="button" className="link" onClick={() => dialog.current?.showModal()}>
        Cautions
      </button>
      <dialog ref={dialog} className="cautions" aria-labelledby="cautions-title">
        <div className="dialog-head">
          <h2 id="cautions-title">
            <svg width="16" height="16" viewBox="0 0 16 16" aria-hidden="true">
              <path d="M8 1L15.5 15H.5zM8 6v5M8 12v1.75" />
            </svg>
            Working on this equipment can kill.
          </h2>
          <button type="button" className="link" onClick={() => dialog.current?.close()}>
            Close
          </button>
        </div>
        <ul>
          <li>
            The voltage is lethal, and so is the charge that stays behind and comes back by itself,
            in the stack and its cable as much as in the bus capacitor. Switch off, discharge
            through a resistor, put the earth stick on, and leave it on while you touch anything.
          </li>
          <li>Work behind interlocks, and never alone.</li>
          <li>Any vacuum device above about 5 kV gives X-rays.</li>
          <li>Corona and arcs make ozone.</li>
          <li>Insulating oil of unknown age may hold PCB.</li>
          <li>A capacitor that is overstressed can explode.</li>
        </ul>
        <p>
          Everything here is computed. A prediction does not take the place of a measurement, a
          computed discharge time is no leave to touch, and local regulations and licensed practice
          come first.
        </p>
      </dialog>
    </>
  );
}

/** The same in one line, until it has been read once. */
export function FirstCaution() {
  const [read, setRead] = useState(wasRead);
  if (read) return null;
  return (
    <aside className="note notice" aria-label="Caution">
      <p>
        <b>Working on this equipment can kill.</b> Lethal voltage, and charge that returns by
        itself: discharge, earth, and only then touch; interlocks and a second person. This page
        predicts; it measures nothing.
      </p>
      <button
        type="button"
        className="link"
        onClick={() => {
          setRead(true);
          try {
            localStorage.setItem(KEY, 'yes');
          } catch {
            // Barred storage: the line comes back at the next visit.
          }
        }}
      >
        I have read this
      </button>
    </aside>
  );
}
