import { Component, lazy, Suspense, useEffect, useRef, useState, type ReactNode, type RefObject } from 'react';
import type { ThemeTokens } from '../../constants/tokens.ts';
import { useMedia } from '../../hooks/use-media.ts';
import type { LaneModel } from './lane-model.ts';
import { LaneTraces } from './lane-svg.tsx';
import { hasWebGl2 } from './webgl2.ts';

/** The canvas painter with its library and WebAssembly: large, so it is fetched only when a chart is first shown. */
const CanvasTraces = lazy(async () => {
  const { loadCanvas } = await import('./canvas/load-canvas.ts');
  await loadCanvas();
  return import('./canvas/canvas-traces.tsx');
});

let isCanvasPossible: boolean | null = null;

function canDrawOnCanvas(): boolean {
  isCanvasPossible ??= hasWebGl2();
  return isCanvasPossible;
}

interface FallbackProps {
  instead: ReactNode;
  children: ReactNode;
}

/** A canvas that could not be loaded or drawn is replaced by the SVG painter, and not tried again. */
class FallBack extends Component<FallbackProps, { failed: boolean }> {
  override state = { failed: false };

  static getDerivedStateFromError(): { failed: boolean } {
    isCanvasPossible = false;
    return { failed: true };
  }

  override render(): ReactNode {
    return this.state.failed ? this.props.instead : this.props.children;
  }
}

/** True once the browser took the context of a canvas inside away, which leaves it blank for good. */
function useContextLost(inside: RefObject<HTMLElement | null>): boolean {
  const [isLost, setIsLost] = useState(false);
  useEffect(() => {
    const element = inside.current;
    if (element === null) return undefined;
    const onLost = () => setIsLost(true);
    // The event does not bubble, so it is caught on its way down.
    element.addEventListener('webglcontextlost', onLost, true);
    return () => element.removeEventListener('webglcontextlost', onLost, true);
  }, [inside]);
  return isLost;
}

/** The dense traces of a lane on a canvas; as SVG while that loads, in print, and where the browser has no WebGL2. */
export function DenseTraces({ model, tokens }: { model: LaneModel; tokens: ThemeTokens }) {
  const box = useRef<HTMLDivElement>(null);
  const isLost = useContextLost(box);
  const isPrinting = useMedia('print');
  const svg = <LaneTraces model={model} />;
  const isCanvas = model.traces.length > 0 && !isPrinting && !isLost && canDrawOnCanvas();
  return (
    <div ref={box}>
      {isCanvas ? (
        <FallBack instead={svg}>
          <Suspense fallback={svg}>
            <CanvasTraces model={model} tokens={tokens} />
          </Suspense>
        </FallBack>
      ) : (
        svg
      )}
    </div>
  );
}
