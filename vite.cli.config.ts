import { chmodSync, readFileSync } from 'node:fs';
import { defineConfig } from 'vite';

/** The command line: one file, which is also the file of its worker threads. */
export default defineConfig({
  define: { __VERSION__: JSON.stringify(JSON.parse(readFileSync('package.json', 'utf8')).version) },
  assetsInclude: ['**/*.stl', '**/*.wasm'],
  build: {
    ssr: 'src/cli/cli.ts',
    outDir: 'out/cli',
    emptyOutDir: true,
    target: 'node20',
    minify: false,
    sourcemap: true,
    rolldownOptions: {
      external: [/^node:/, 'electron'],
      output: { format: 'es', entryFileNames: 'cli.mjs', codeSplitting: false },
    },
  },
  ssr: { noExternal: true, external: ['electron'] },
  plugins: [
    {
      name: 'make-executable',
      writeBundle: (options) => chmodSync(`${options.dir}/cli.mjs`, 0o755),
    },
  ],
});
