/** The bands of the page; layout only. */
import './page.css';
import { FirstCaution } from './Cautions.tsx';
import { DriveLine } from './drive/DriveLine.tsx';
import { Lanes } from './lanes/Lanes.tsx';
import { Ledger } from './ledger/Ledger.tsx';
import { say, useNotice } from './notice.ts';
import { PowerPath } from './power-path/PowerPath.tsx';
import { Strip } from './Strip.tsx';

function Notice() {
  const message = useNotice((state) => state.message);
  if (message === null) return null;
  return (
    <aside className="note notice" aria-label="Note">
      <p role="alert">{message}</p>
      <button type="button" className="link" onClick={() => say(null)}>
        Dismiss
      </button>
    </aside>
  );
}

/** Strip, drive line, power path, lanes and ledger. */
export function App() {
  return (
    <>
      <Strip />
      <FirstCaution />
      <Notice />
      <DriveLine />
      <main>
        <PowerPath />
        <div className="bench">
          <Lanes />
          <Ledger />
        </div>
      </main>
    </>
  );
}
