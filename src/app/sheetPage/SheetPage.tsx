import { useEffect, useRef } from 'react';
import { createPortal } from 'react-dom';
import { SHEET_STYLE } from '../../core/handover';
import './sheetPage.css';

interface SheetPageProps {
  readonly title: string;
  /** The sheet's own element as HTML, everything from the rig escaped. */
  readonly body: string;
  readonly onClose: () => void;
}

/**
 * The calculation sheet as paper over the whole page. While it is open the rest is out of reach, and it alone is
 * printed; the browser's own print dialogue makes a PDF of it.
 */
export function SheetPage({ title, body, onClose }: SheetPageProps) {
  const paper = useRef<HTMLDivElement>(null);
  const close = useRef<HTMLButtonElement>(null);

  useEffect(() => {
    const style = new CSSStyleSheet();
    style.replaceSync(SHEET_STYLE);
    document.adoptedStyleSheets.push(style);
    const rest = document.getElementById('root');
    const before = document.activeElement;
    rest?.setAttribute('inert', '');
    close.current?.focus();
    return () => {
      document.adoptedStyleSheets = document.adoptedStyleSheets.filter((each) => each !== style);
      rest?.removeAttribute('inert');
      if (before instanceof HTMLElement) before.focus();
    };
  }, []);

  useEffect(() => {
    const article = new DOMParser().parseFromString(body, 'text/html').body.firstElementChild;
    paper.current?.replaceChildren(...(article ? [document.importNode(article, true)] : []));
  }, [body]);

  useEffect(() => {
    const onKeyDown = (event: KeyboardEvent): void => {
      if (event.key === 'Escape') onClose();
    };
    addEventListener('keydown', onKeyDown);
    return () => removeEventListener('keydown', onKeyDown);
  }, [onClose]);

  return createPortal(
    <div className="sheet-page" role="dialog" aria-modal="true" aria-label={`Calculation sheet of ${title}`}>
      <div className="sheet-page-bar">
        <button type="button" onClick={() => print()}>
          Print, or save as PDF
        </button>
        <button type="button" ref={close} onClick={onClose}>
          Close
        </button>
      </div>
      <div className="sheet-page-paper" ref={paper} />
    </div>,
    document.body,
  );
}
