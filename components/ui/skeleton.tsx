import { VisuallyHidden } from './visually-hidden.tsx';

/** Lines in the place of what is loading, as high as what comes, so that nothing jumps. */
export function Skeleton({ lines = 3, lineHeight = 24, name = 'Loading' }: { lines?: number; lineHeight?: number; name?: string }) {
  return (
    <div role="status" style={{ display: 'flex', flexDirection: 'column' }}>
      <VisuallyHidden>{name}</VisuallyHidden>
      {Array.from({ length: lines }, (_, index) => (
        <div key={index} aria-hidden="true" style={{ height: lineHeight, paddingBlock: lineHeight * 0.2 }}>
          <div className="skeleton" style={{ height: '100%', width: index === lines - 1 ? '55%' : '90%' }} />
        </div>
      ))}
    </div>
  );
}
