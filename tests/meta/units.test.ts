import { readdirSync, readFileSync } from 'node:fs'
import { join, relative } from 'node:path'
import { fileURLToPath } from 'node:url'
import ts from 'typescript'
import { describe, expect, it } from 'vitest'

const root = fileURLToPath(new URL('../..', import.meta.url))
/**
 * Physical quantities, which end in their unit as house-style section 4 spells them: stem, then the units in use. r2 is left out, for the
 * coefficient of determination goes by that name as well.
 */
const STEMS: Readonly<Record<string, readonly string[]>> = {
  ti: ['s', 'ms'], te: ['s', 'ms'], tr: ['s', 'ms'], t1: ['s', 'ms'], t2: ['s', 'ms'], tsat: ['s', 'ms'], duration: ['s', 'ms', 'd', 'min', 'h'], halfLife: ['s', 'h', 'd'],
  conc: ['mM', 'M', 'uM'], concentration: ['mM', 'M', 'uM'], temperature: ['K', 'C'], b0: ['T'], b1: ['uT', 'T'], flip: ['rad', 'deg'],
  r1: ['per_mM_s'], rate1: ['per_s'], rate2: ['per_s'], molarMass: ['g_per_mol'], ionicStrength: ['M', 'mM', 'mol_per_l'], wavelength: ['nm'], volume: ['ml', 'ul', 'l'], mass: ['mg', 'g', 'kg'],
}
const SUFFIX = /^[a-zA-Z]\w*_(?:s|ms|d|min|h|mM|M|uM|K|C|T|uT|rad|deg|ppm|Hz|au|frac|per_\w+|\w+_per_\w+|nm|ml|ul|l|mg|g|kg|g_per_mol)$/

const NUMBER_TYPE = /^(?:readonly )?(?:number(?:\[\])?|Float64Array)(?: \| null)?$/
const NUMBER_VALUE = /^(?:-?[\d.]|z\.number\(|z\.array\(z\.number\()/
interface Declared { name: string, place: string }

/** Every name that a source gives to a number: by its type, by a literal, or by a schema. */
function numberNames(file: string, text: string): Declared[] {
  const source = ts.createSourceFile(file, text, ts.ScriptTarget.Latest)
  const found: Declared[] = []
  const visit = (node: ts.Node): void => {
    if ((ts.isVariableDeclaration(node) || ts.isParameter(node) || ts.isPropertySignature(node) || ts.isPropertyAssignment(node)) && ts.isIdentifier(node.name)) {
      const type = ts.isPropertyAssignment(node) ? undefined : node.type?.getText(source)
      const value = ts.isPropertySignature(node) ? undefined : node.initializer?.getText(source)
      if ((type !== undefined && NUMBER_TYPE.test(type)) || (type === undefined && value !== undefined && NUMBER_VALUE.test(value))) {
        found.push({ name: node.name.text, place: `${file}:${source.getLineAndCharacterOfPosition(node.getStart(source)).line + 1} ${node.name.text}` })
      }
    }
    ts.forEachChild(node, visit)
  }
  visit(source)
  return found
}

const filesUnder = (folder: string): string[] => readdirSync(join(root, folder), { recursive: true, withFileTypes: true })
  .filter(one => one.isFile() && one.name.endsWith('.ts')).map(one => relative(root, join(one.parentPath, one.name))).sort()
const names = ['shared', 'server/services', 'server/queries'].flatMap(filesUnder).flatMap(file => numberNames(file, readFileSync(join(root, file), 'utf8')))
const isBare = ({ name }: Declared): boolean => name in STEMS
const isOdd = ({ name }: Declared): boolean => name.includes('_') && name.split('_')[0]! in STEMS && !SUFFIX.test(name)

describe('names of numbers', () => {
  it('end in their unit, everywhere in shared/ and in the services [house style: section 4]', () => {
    expect(names.length).toBeGreaterThan(500)
    expect(names.filter(isBare).map(one => one.place)).toEqual([])
  })

  it('end in a unit that the product writes so, when they begin with a known stem', () => {
    expect(names.filter(isOdd).map(one => one.place)).toEqual([])
  })

  it('are found without one by this test, in a type, a literal, a schema and a parameter', () => {
    const text = 'interface A { ti: number, te_ms: number }\nconst conc = 0.5\nconst B = { temperature: z.number().nullable(), b0_T: z.number() }\nfunction f(t1: readonly number[], conc_mol: number) {}'
    const found = numberNames('a.ts', text)
    expect(found.filter(isBare).map(one => one.name)).toEqual(['ti', 'conc', 'temperature', 't1'])
    expect(found.filter(isOdd).map(one => one.name)).toEqual(['conc_mol'])
  })
})
