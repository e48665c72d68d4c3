/** A module and all it imports as one script in a string; made by `scripts/vite-plugin-bundle.ts`. */
declare module '*?bundle=iife' {
  const code: string;
  export default code;
}
declare module '*?bundle=node' {
  const code: string;
  export default code;
}
