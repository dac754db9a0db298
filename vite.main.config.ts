import { defineConfig } from 'vite';

/** One CommonJS file for each part of the desktop host: `--mode main` and `--mode preload`. */
export default defineConfig(({ mode }) => {
  const part = mode === 'preload' ? 'preload' : 'main';
  return {
    publicDir: false,
    build: {
      ssr: `electron/${part}.ts`,
      outDir: `out/${part}`,
      emptyOutDir: true,
      target: 'node18',
      minify: false,
      sourcemap: true,
      rolldownOptions: {
        external: ['electron', /^node:/],
        output: { format: 'cjs', entryFileNames: '[name].cjs', codeSplitting: false },
      },
    },
    ssr: { noExternal: true, external: ['electron'] },
  };
});
