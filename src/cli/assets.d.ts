/** Files that the build puts into the program itself. */
declare module '*?raw' {
  const text: string;
  export default text;
}
declare module '*?inline' {
  /** A data URL in base64. */
  const url: string;
  export default url;
}
declare module '*?url' {
  const url: string;
  export default url;
}
