import type { ReactNode } from 'react';

export interface ScreenProps {
  children: ReactNode;
  /** Pinned below what scrolls: an undo bar, the buttons of a form. */
  footer?: ReactNode;
  /** Charts and tables take the whole width; text stays at 70 characters. */
  wide?: boolean;
}

/** The body of a screen: it scrolls, keeps text lines short, and holds a pinned footer. */
export function Screen({ children, footer, wide }: ScreenProps) {
  return (
    <div className="screen">
      <div className="screen-scroll">
        <div className={wide === true ? 'screen-body screen-body-wide' : 'screen-body'}>{children}</div>
      </div>
      {footer === undefined || footer === null ? null : <div className="screen-footer">{footer}</div>}
    </div>
  );
}
