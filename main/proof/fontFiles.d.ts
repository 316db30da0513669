/** A font file as a data URL, put into the bundle. */
declare module '*.woff?inline' {
  const dataUrl: string;
  export default dataUrl;
}
