/** What the bundler makes of a font file: its address. */
declare module '*.woff2' {
  const url: string;
  export default url;
}
/** What the bundler makes of a WebAssembly file: its address. */
declare module '*.wasm' {
  const url: string;
  export default url;
}
declare module '*.css';
