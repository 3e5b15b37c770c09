import { attribute, scanTags } from './xml'

export interface SheetPart { name: string, isHidden: boolean, path: string }

/** Where the parts of a workbook stand in its archive. */
export interface WorkbookParts { sheets: SheetPart[], strings: string | null, styles: string | null, has1904: boolean, hasLinks: boolean, hasMacros: boolean }

interface Relation { id: string, type: string, target: string }

/** Path of the workbook's main part; null where the archive is none. */
export function mainPart(rootRelations: string | null, names: readonly string[]): string | null {
  const named = rootRelations === null ? undefined : readRelations(rootRelations, '').find(one => one.type === 'officeDocument')?.target
  return [named, 'xl/workbook.xml'].find(path => path !== undefined && names.includes(path)) ?? null
}

export const relationsOf = (path: string): string => path.replace(/([^/]*)$/, '_rels/$1.rels')

export function readParts(main: string, mainXml: string, relationsXml: string, names: readonly string[]): WorkbookParts {
  const relations = readRelations(relationsXml, main.slice(0, main.lastIndexOf('/') + 1)).filter(one => names.includes(one.target))
  const sheets: SheetPart[] = []
  let has1904 = false
  scanTags(mainXml, (tag) => {
    if (tag.isEnd) return
    if (tag.name === 'workbookPr') has1904 ||= ['1', 'true'].includes(attribute(tag, 'date1904') ?? '')
    if (tag.name !== 'sheet') return
    const relation = relations.find(one => one.id === attribute(tag, 'id') && one.type === 'worksheet')
    if (relation) sheets.push({ name: attribute(tag, 'name') ?? '', isHidden: (attribute(tag, 'state') ?? 'visible') !== 'visible', path: relation.target })
  })
  const part = (type: string) => relations.find(one => one.type === type)?.target ?? null
  return { sheets, has1904, strings: part('sharedStrings'), styles: part('styles'), hasLinks: names.some(name => /\/externalLinks\//.test(name)), hasMacros: names.some(name => /vbaProject\.bin$/i.test(name)) }
}

/** Relations inside the archive; what leads out of it is not followed. */
function readRelations(xml: string, folder: string): Relation[] {
  const relations: Relation[] = []
  scanTags(xml, (tag) => {
    if (tag.name !== 'Relationship' || tag.isEnd || attribute(tag, 'TargetMode') === 'External') return
    const target = attribute(tag, 'Target') ?? ''
    relations.push({ id: attribute(tag, 'Id') ?? '', type: (attribute(tag, 'Type') ?? '').split('/').at(-1) ?? '', target: resolved(target, folder) })
  })
  return relations
}

function resolved(target: string, folder: string): string {
  const parts: string[] = []
  for (const part of (target.startsWith('/') ? target.slice(1) : folder + target).split('/')) {
    if (part === '..') parts.pop()
    else if (part !== '.' && part !== '') parts.push(part)
  }
  return parts.join('/')
}
