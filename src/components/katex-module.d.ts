declare module 'katex/dist/katex.mjs' {
  export { default } from 'katex';
}
