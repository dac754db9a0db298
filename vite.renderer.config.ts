import { cpSync, existsSync, mkdirSync, readdirSync } from 'node:fs';
import react from '@vitejs/plugin-react';
import { defineConfig, type Plugin } from 'vite';

const outDir = 'out/renderer';

/** The demonstration travels with the window, so that a first start needs nothing from outside. */
const demonstration: Plugin = {
  name: 'demonstration',
  closeBundle() {
    if (!existsSync('assets/demo')) return;
    mkdirSync(`${outDir}/demo`, { recursive: true });
    for (const file of readdirSync('assets/demo'))
      if (/\.(drape\.json|stl|svg|dxf|gbr|drl)$/i.test(file))
        cpSync(`assets/demo/${file}`, `${outDir}/demo/${file}`);
  },
};

export default defineConfig({
  root: 'src/app',
  base: './',
  publicDir: '../../assets/icons',
  plugins: [react(), demonstration],
  worker: { format: 'es' },
  build: {
    outDir: `../../${outDir}`,
    emptyOutDir: true,
    target: 'chrome114',
    assetsInlineLimit: 0,
    modulePreload: { polyfill: false },
    sourcemap: true,
    chunkSizeWarningLimit: 2000,
  },
});
