import { type MarkedQuantity, QUANTITY_MARKS } from '../styles/quantityMarks';

/** The shape of a quantity as small as a letter, in the colour of the text about it. */
export function MarkGlyph({ quantity }: { readonly quantity: MarkedQuantity }) {
  return (
    <svg width="26" height="12" viewBox="0 0 26 12" aria-hidden="true" focusable="false">
      {glyphOf(quantity)}
    </svg>
  );
}

function glyphOf(quantity: MarkedQuantity) {
  switch (QUANTITY_MARKS[quantity].shape) {
    case 'doubleArrow':
      return (
        <>
          <path d="M1 6H14" stroke="currentColor" strokeWidth="2" />
          <path d="M12 2l7 4-7 4zM18 2l7 4-7 4z" fill="currentColor" />
        </>
      );
    case 'arcArrow':
      return (
        <>
          <path d="M2 10C4 3 13 1 20 6" fill="none" stroke="currentColor" strokeWidth="2.5" />
          <path d="M17.5 8.5L19 1.5l6 8z" fill="currentColor" />
        </>
      );
    case 'openArrow':
      return (
        <>
          <path d="M1 6H16" stroke="currentColor" strokeWidth="2" strokeDasharray="4 2.5" />
          <path d="M17 2l7 4-7 4z" fill="none" stroke="currentColor" strokeWidth="1.5" />
        </>
      );
    case 'lozenges':
      return <path d="M1 6l4-4 4 4-4 4zM9 6l4-4 4 4-4 4zM17 6l4-4 4 4-4 4z" fill="currentColor" />;
  }
}
