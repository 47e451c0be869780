import { LoadSkiaWeb } from '@shopify/react-native-skia/lib/module/web';
import wasmUrl from 'canvaskit-wasm/bin/full/canvaskit.wasm';

/** Fetches and compiles the drawing library, from our own origin; a second call does nothing. */
export function loadCanvas(): Promise<void> {
  return LoadSkiaWeb({ locateFile: () => wasmUrl });
}
