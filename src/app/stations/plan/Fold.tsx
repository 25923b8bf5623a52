import { type ReactNode, useId, useState } from 'react';

interface FoldProps {
  readonly title: string;
  readonly isOpenAtFirst?: boolean;
  /** Mounted while open only, so that what a closed fold would compute is not computed. */
  readonly children: ReactNode;
}

/** Fields or results that belong together, folded away until they are wanted. */
export function Fold({ title, isOpenAtFirst = false, children }: FoldProps) {
  const id = useId();
  const [isOpen, setOpen] = useState(isOpenAtFirst);
  return (
    <section className="fold" data-open={isOpen || undefined}>
      <h3>
        <button type="button" aria-expanded={isOpen} aria-controls={id} onClick={() => setOpen(!isOpen)}>
          {title}
        </button>
      </h3>
      <div id={id} hidden={!isOpen}>
        {isOpen && children}
      </div>
    </section>
  );
}
