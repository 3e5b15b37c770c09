/**
 * Speed, compared in one run as ratios: answers are compared before speed is. Nothing is asserted here; the goals stand beside the numbers.
 * npm run bench            all but what needs a browser
 * npm run bench -- small series equilibria titration lorentzian threads click
 */
const PARTS: Readonly<Record<string, () => Promise<{ run: () => void | Promise<void> }>>> = {
  small: () => import('./small'),
  series: () => import('./series'),
  equilibria: () => import('./equilibria'),
  titration: () => import('./titration'),
  lorentzian: () => import('./lorentzian'),
  bloch: () => import('./bloch'),
  threads: () => import('./threads'),
  click: () => import('./click'),
}
const BROWSER = ['click']

const asked = process.argv.slice(2)
const unknown = asked.find(name => !Object.hasOwn(PARTS, name))
if (unknown !== undefined) throw new Error(`There is no part of the bench called ${unknown}: ${Object.keys(PARTS).join(', ')}.`)
for (const name of asked.length > 0 ? asked : Object.keys(PARTS).filter(one => !BROWSER.includes(one))) {
  const part = await PARTS[name]?.()
  await part?.run()
}
