/** Whether the browser can make a WebGL2 context. Without one a canvas painter would stay blank and say nothing. */
export function hasWebGl2(): boolean {
  const context = document.createElement('canvas').getContext('webgl2');
  if (context === null) return false;
  // A browser allows about 16 contexts: the probe must not keep one.
  context.getExtension('WEBGL_lose_context')?.loseContext();
  return true;
}
