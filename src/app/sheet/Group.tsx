import type { ReactNode } from 'react';

interface GroupProps {
  readonly title: string;
  readonly aside?: ReactNode;
  readonly children: ReactNode;
}

/** Fields that belong together, under a rule with their name. */
export function Group({ title, aside, children }: GroupProps) {
  return (
    <section className="group">
      <h3>
        {title}
        {aside}
      </h3>
      {children}
    </section>
  );
}
