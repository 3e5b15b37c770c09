import { join } from 'node:path'
import { defineNuxtModule, useLogger } from '@nuxt/kit'
import { build } from 'esbuild'

/** What the worker process consists of: source under server/, and the name beside the web server's own entry; the thread that reads large files and workbooks serves the web process. */
const ENTRIES = { worker: 'server/worker/main.ts', analyseThread: 'server/worker/analyseThread.ts', tableThread: 'server/worker/tableThread.ts' }

/**
 * Bundles the worker process and its calculation thread beside the built web server: <output>/server/worker.mjs and analyseThread.mjs.
 * Our own code is bundled, packages are resolved from node_modules at run time. It runs after Nitro has written its output, which empties the folder first;
 * in development the worker runs from its sources.
 */
export default defineNuxtModule({
  meta: { name: 'worker' },
  setup(_options, nuxt) {
    if (nuxt.options.dev) return
    const root = nuxt.options.rootDir
    nuxt.hook('nitro:init', (nitro) => {
      nitro.hooks.hook('compiled', async () => {
        await build({
          absWorkingDir: root,
          entryPoints: Object.entries(ENTRIES).map(([out, source]) => ({ in: join(root, source), out })),
          outdir: nitro.options.output.serverDir,
          outExtension: { '.js': '.mjs' },
          bundle: true,
          platform: 'node',
          format: 'esm',
          target: 'node20',
          packages: 'external',
          alias: { '#shared': join(root, 'shared'), '~~': root, '~': root },
          logLevel: 'warning',
        })
        useLogger('worker').success(`Bundled ${Object.keys(ENTRIES).join(' and ')}`)
      })
    })
  },
})
