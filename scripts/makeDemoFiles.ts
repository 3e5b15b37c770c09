import { mkdir, readdir, rm, writeFile } from 'node:fs/promises'
import { fileURLToPath } from 'node:url'
import { demoFileText } from '../db/seeds/demo/forward'
import { DEMO_FILES, TRY_FILE } from '../db/seeds/demo/series'
import { DEMO_TITRATIONS, titrationText } from '../db/seeds/demo/titrations'

/** Writes the raw files of the demonstration from the forward models; the same seed gives the same bytes, and a test holds the committed ones against it. */
const folder = fileURLToPath(new URL('../fixtures/demo/', import.meta.url))
await mkdir(folder, { recursive: true })
for (const old of await readdir(folder)) await rm(`${folder}${old}`)
for (const file of [...DEMO_FILES, TRY_FILE]) await writeFile(`${folder}${file.fileName}`, demoFileText(file))
for (const file of DEMO_TITRATIONS) await writeFile(`${folder}${file.fileName}`, titrationText(file))
console.log(`${DEMO_FILES.length + DEMO_TITRATIONS.length + 1} files in fixtures/demo`)
