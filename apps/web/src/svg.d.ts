/** SVG files are inlined as text by the builder's loader. */
declare module '*.svg' {
  const text: string;
  export default text;
}
