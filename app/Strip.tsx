/** The strip at the head of the page: mark, name of the design, tools. */
import { Cautions } from './Cautions.tsx';
import { setTitle } from './document/actions.ts';
import { applyEdit, useDocument } from './document/store.ts';
import { useAttempt } from './quantity/attempt.ts';
import { CopyLink } from './share/CopyLink.tsx';
import { OpenDesign } from './shelf/Shelf.tsx';
import { toggleTheme } from './theme.ts';

function DesignName() {
  const name = useDocument((state) => state.design.name);
  const attempt = useAttempt(name);
  const commit = () => {
    if (attempt.typed === null) return;
    attempt.finish(applyEdit(setTitle(useDocument.getState().design, 'name', attempt.typed)));
  };
  return (
    <input
      className="design-name"
      aria-label="Name of the design"
      title={attempt.problem ?? undefined}
      aria-invalid={attempt.problem !== null || undefined}
      autoComplete="off"
      spellCheck={false}
      maxLength={80}
      value={attempt.text}
      onChange={(event) => attempt.type(event.currentTarget.value)}
      onBlur={commit}
      onKeyDown={(event) => {
        if (event.key === 'Enter') commit();
        if (event.key === 'Escape') attempt.finish(null);
      }}
    />
  );
}

function History() {
  const past = useDocument((state) => state.past.length > 0);
  const future = useDocument((state) => state.future.length > 0);
  const { undo, redo } = useDocument.getState();
  return (
    <>
      <button type="button" className="link" disabled={!past} onClick={undo}>
        Undo
      </button>
      <button type="button" className="link" disabled={!future} onClick={redo}>
        Redo
      </button>
    </>
  );
}

/** Mark, name, and what can be done with the design as a whole. */
export function Strip() {
  return (
    <header className="strip">
      <h1 className="mark">
        <svg width="18" height="16" viewBox="0 0 18 16" aria-hidden="true">
          <path d="M0 15H5V10H10V5H15V.5H18" />
        </svg>
        Kilostack
      </h1>
      <DesignName />
      <div className="tools">
        <History />
        <CopyLink />
        <OpenDesign />
        <button type="button" className="link" onClick={toggleTheme}>
          Light / dark
        </button>
        <Cautions />
      </div>
    </header>
  );
}
