/** A tag of a document, without its namespace prefix, the text before it as it stands, and where it begins and ends. */
export interface Tag { name: string, prefix: string, isEnd: boolean, isEmpty: boolean, attributes: string, textBefore: string, start: number, end: number }

/** Calls `onTag` for every tag, in one pass; comments and processing instructions are passed over, sections of character data count as text. */
export function scanTags(xml: string, onTag: (tag: Tag) => void): void {
  let text = ''
  let at = 0
  while (at < xml.length) {
    const open = xml.indexOf('<', at)
    if (open < 0) return
    text += xml.slice(at, open)
    const skipped = skipTo(xml, open)
    if (skipped !== null) {
      if (xml.startsWith('<![CDATA[', open)) text += escaped(xml.slice(open + 9, Math.max(open + 9, skipped - 3)))
      at = skipped
      continue
    }
    const close = xml.indexOf('>', open)
    if (close < 0) return
    onTag(readTag(xml, { open, close, textBefore: text }))
    text = ''
    at = close + 1
  }
}

function skipTo(xml: string, open: number): number | null {
  const sign = xml[open + 1]
  if (sign !== '!' && sign !== '?') return null
  const end = xml.startsWith('<!--', open) ? '-->' : xml.startsWith('<![CDATA[', open) ? ']]>' : xml.startsWith('<?', open) ? '?>' : null
  if (end === null) return null
  const found = xml.indexOf(end, open)
  return found < 0 ? xml.length : found + end.length
}

function readTag(xml: string, { open, close, textBefore }: { open: number, close: number, textBefore: string }): Tag {
  const isEnd = xml.charCodeAt(open + 1) === 47
  const isEmpty = !isEnd && xml.charCodeAt(close - 1) === 47
  const last = isEmpty ? close - 1 : close
  const first = isEnd ? open + 2 : open + 1
  let cut = first
  let begin = first
  // Sheets have hundreds of thousands of tags: the name is found sign by sign.
  for (; cut < last && xml.charCodeAt(cut) > 32; cut++) if (xml.charCodeAt(cut) === 58) begin = cut + 1
  return { name: xml.slice(begin, cut), prefix: xml.slice(first, begin), isEnd, isEmpty, attributes: xml.slice(cut, last), textBefore, start: open, end: close + 1 }
}

/** Value of an attribute, whatever its prefix; null where the tag has none. */
export function attribute({ attributes }: Pick<Tag, 'attributes'>, name: string): string | null {
  if (!attributes.includes(name)) return null
  for (const [, key, double, single] of attributes.matchAll(/\s(?:[\w-]+:)?([\w-]+)\s*=\s*(?:"([^"]*)"|'([^']*)')/g)) {
    if (key === name) return plainText(double ?? single ?? '')
  }
  return null
}

const NAMED: Readonly<Record<string, string>> = { lt: '<', gt: '>', amp: '&', quot: '"', apos: '\'' }

export function plainText(text: string): string {
  return text.replace(/&(?:(lt|gt|amp|quot|apos)|#(\d{1,7})|#x([0-9a-fA-F]{1,6}));/g, (whole, name?: string, decimal?: string, hex?: string) => {
    if (name !== undefined) return NAMED[name] ?? whole
    const code = decimal === undefined ? Number.parseInt(hex ?? '', 16) : Number(decimal)
    return code <= 0x10FFFF ? String.fromCodePoint(code) : whole
  })
}

const escaped = (text: string): string => text.replaceAll('&', '&amp;').replaceAll('<', '&lt;')

/** Text of an entry; null where it is no UTF-8, or declares types or entities of its own, which no sheet needs. */
export function decodeXml(bytes: Uint8Array): string | null {
  try {
    const text = new TextDecoder('utf-8', { fatal: true }).decode(bytes)
    return /<!DOCTYPE|<!ENTITY/i.test(text) || text.includes('\u0000') ? null : text
  }
  catch (error) {
    if (error instanceof TypeError) return null
    throw error
  }
}
