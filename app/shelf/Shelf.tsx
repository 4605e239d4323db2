/** Designs to open: the examples on their shelf, and files. */
import { useRef } from 'react';
import { type Design, EXAMPLES, formatQuantity } from '../../sim-core/index.ts';
import { MOST_CHARACTERS, readDesign, writeDesign } from '../document/file.ts';
import { useDocument } from '../document/store.ts';
import { say } from '../notice.ts';

const RECTIFIERS: Readonly<Record<Design['rectifier']['kind'], string>> = {
  bridge: 'bridge',
  'half-wave': 'half-wave',
  doubler: 'doubler',
  ladder: 'ladder',
  none: 'without rectifier',
};

/** Sections, drive and earth of a design in one line. */
function facts({ sections, rectifier, supply, bridge, stack }: Design): string {
  const stages = rectifier.kind === 'ladder' ? ` of ${rectifier.stages} stages` : '';
  const earth = stack.earth === 'floating' ? 'floating' : `earth at joint ${stack.joint}`;
  const drive = `${formatQuantity(supply.voltage, 'V', 3)} at ${formatQuantity(bridge.frequency, 'Hz', 3)}`;
  return `${sections.count} × ${RECTIFIERS[rectifier.kind]}${stages}, ${drive}, ${earth}`;
}

/** The stairs of a design in small, its earthed joint on the zero line. */
function Stairs({ design }: { design: Design }) {
  const { count } = design.sections;
  const earthed = design.stack.earth === 'joint' ? design.stack.joint : count / 2;
  const height = 40;
  const step = Math.min(12, height / count);
  const width = Math.min(18, 84 / count);
  const zero = 4 + height - ((height - count * step) / 2 + earthed * step);
  const left = 6;
  const foot = zero + earthed * step;
  let d = `M${left} ${foot}`;
  for (let k = 1; k <= count; k++) {
    d += `H${left + (k - 0.5) * width}V${foot - k * step}H${left + k * width}`;
  }
  const x = left + earthed * width;
  return (
    <svg width="96" height="52" aria-hidden="true" className="drawing">
      <path className="grid" d={`M0 ${zero}H96`} />
      <path className="wire" d={d} />
      <path
        className="wire"
        d={`M${x} ${zero}v4M${x - 5} ${zero + 4}h10M${x - 3} ${zero + 6.5}h6`}
      />
    </svg>
  );
}

/** A button that opens the shelf in a dialog. */
export function OpenDesign() {
  const dialog = useRef<HTMLDialogElement>(null);
  const open = (design: Design) => {
    // One step of the document, so that what was on the page can be had back by Undo.
    useDocument.getState().edit(design);
    say(null);
    dialog.current?.close();
  };
  const read = async (file: File) => {
    // No more is read than a design can be long: a file may be of any size.
    const outcome = readDesign(await file.slice(0, 4 * MOST_CHARACTERS + 4).text());
    if (outcome.ok) return open(outcome.value);
    say(`${file.name.slice(0, 80)}: ${outcome.problem.message} The page stays as it was.`);
    dialog.current?.close();
  };
  const save = () => {
    const { design } = useDocument.getState();
    const address = URL.createObjectURL(
      new Blob([writeDesign(design)], { type: 'application/json' }),
    );
    const link = document.createElement('a');
    link.href = address;
    link.download = `${design.name.replace(/[^\p{L}\p{N}]+/gu, '-').replace(/^-|-$/g, '') || 'design'}.json`;
    link.click();
    URL.revokeObjectURL(address);
  };
  return (
    <>
      <button type="button" className="link" onClick={() => dialog.current?.showModal()}>
        Open
      </button>
      <dialog ref={dialog} aria-labelledby="shelf-title">
        <div className="dialog-head">
          <h2 id="shelf-title">Designs to open</h2>
          <button type="button" className="link" onClick={() => dialog.current?.close()}>
            Close
          </button>
        </div>
        <ul className="shelf">
          {EXAMPLES.map(({ id, about, design }) => (
            <li key={id}>
              <button type="button" onClick={() => open(design)}>
                <Stairs design={design} />
                <span>
                  <b>{design.name}</b>
                  <span>{about}</span>
                  <span className="m">{facts(design)}</span>
                </span>
              </button>
            </li>
          ))}
        </ul>
        <div className="files">
          <label>
            <input
              type="file"
              accept=".json,application/json"
              onChange={(event) => {
                const [file] = event.currentTarget.files ?? [];
                event.currentTarget.value = '';
                if (file) void read(file);
              }}
            />
            <span className="link">Open a design file</span>
          </label>
          <button type="button" className="link" onClick={save}>
            Save this design as a file
          </button>
        </div>
      </dialog>
    </>
  );
}
