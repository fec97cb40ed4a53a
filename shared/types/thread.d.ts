/** URL of a thread's own chunk, made by scripts/build/worker-entries.ts. */
declare module '*?thread' {
  const url: string
  export default url
}
