import { attribute, scanTags } from './xml'

/** Indices of the cell styles that show a number as a percentage: 5 % is stored as 0.05. */
export function percentStyles(xml: string): Set<number> {
  const formats = new Map<number, string>([[9, '0%'], [10, '0.00%']])
  const found = new Set<number>()
  let index = -1
  scanTags(xml, (tag) => {
    if (tag.isEnd) {
      if (tag.name === 'cellXfs') index = -1
      return
    }
    if (tag.name === 'numFmt') formats.set(Number(attribute(tag, 'numFmtId')), attribute(tag, 'formatCode') ?? '')
    if (tag.name === 'cellXfs') index = 0
    else if (tag.name === 'xf' && index >= 0) {
      // A sign in quotes or behind a backslash is a word, not a percentage.
      const format = (formats.get(Number(attribute(tag, 'numFmtId'))) ?? '').replace(/"[^"]*"|\\./g, '')
      if (format.includes('%')) found.add(index)
      index++
    }
  })
  return found
}
