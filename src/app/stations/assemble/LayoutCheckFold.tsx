import { lazy, Suspense, useId, useState } from 'react';

const LayoutCheck = lazy(async () => ({ default: (await import('./LayoutCheck')).LayoutCheck }));

/** The layout check, folded away and not even fetched until it is wanted. */
export function LayoutCheckFold() {
  const [isOpen, setOpen] = useState(false);
  const id = useId();
  return (
    <>
      <button
        type="button"
        className="wide"
        aria-expanded={isOpen}
        aria-controls={id}
        onClick={() => setOpen(!isOpen)}
      >
        Layout check
      </button>
      <div id={id} hidden={!isOpen}>
        {isOpen && (
          <Suspense fallback={<p aria-busy="true">Opening…</p>}>
            <LayoutCheck />
          </Suspense>
        )}
      </div>
    </>
  );
}
