import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import { defineConfig } from 'vite';
import { fileURLToPath } from 'node:url';

export default defineConfig({
  plugins: [react(), tailwindcss()],
  resolve: {
    // react-katex is CommonJS and would bring a second copy of KaTeX into the bundle; it gets the client's own door to it.
    alias: [{ find: /^katex$/, replacement: fileURLToPath(new URL('src/components/katex.ts', import.meta.url)) }],
  },
  // `npm run dev` starts Vite in front of the server and says where that one listens.
  server: process.env.BACKEND ? { proxy: { '^/(api|auth|healthz)(/|$)': { target: process.env.BACKEND } } } : {},
  // The server puts each answer's nonce in its place.
  html: { cspNonce: '__CSP_NONCE__' },
  worker: { format: 'es' },
  build: {
    outDir: 'dist/client',
    emptyOutDir: true,
    target: 'es2022',
    // Small fonts would become data: URLs, which the content security policy (font-src 'self') refuses.
    assetsInlineLimit: 0,
    // The engine is one file, loaded by its worker; mathjs another, loaded where trial values are typed.
    chunkSizeWarningLimit: 1500,
    rolldownOptions: { checks: { pluginTimings: false } },
  },
});
