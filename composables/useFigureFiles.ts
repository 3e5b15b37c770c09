import { CAUTION } from '#shared/caution'
import { figureCsv } from '#shared/figure/figureCsv'
import { fileNameFrom } from '#shared/files/csv'
import { plainNotation } from '#shared/notation'
import type { FigureSpec } from '#shared/schemas/figure'

const PAINTED = ['fill', 'fill-opacity', 'stroke', 'stroke-width', 'stroke-dasharray', 'stroke-opacity', 'opacity', 'font-size', 'font-weight', 'font-family', 'shape-rendering', 'text-anchor', 'paint-order'] as const
const FOOT_px = 22
const MARGIN_px = 10
const PNG_SCALE = 2

/** Where the words before the file names of a page's figures come from: agent, batch, version. */
export const FIGURE_PREFIX = Symbol('words before the file names of figures') as InjectionKey<() => string>

/** Writes a figure that is on the screen to a file: as drawn, on paper colours, with the caution beneath; or its numbers. */
export function useFigureFiles(figure: () => FigureSpec, drawing: () => SVGSVGElement | null) {
  const prefix = inject(FIGURE_PREFIX, () => '')
  const nameFor = (ending: string): string => `${fileNameFrom(prefix(), figure().id === figure().title ? '' : figure().id, plainNotation(figure().title))}.${ending}`

  function saveCsv(): void {
    saveFile(new Blob([`\uFEFF${figureCsv(figure(), [figure().caption ?? '', CAUTION].filter(line => line !== ''))}`], { type: 'text/csv;charset=utf-8' }), nameFor('csv'))
  }
  function saveSvg(): void {
    const paper = drawing() && onPaper(drawing()!, figure())
    if (paper) saveFile(new Blob([paper.text], { type: 'image/svg+xml;charset=utf-8' }), nameFor('svg'))
  }
  async function savePng(): Promise<void> {
    const paper = drawing() && onPaper(drawing()!, figure())
    if (paper) saveFile(await rasterise(paper), nameFor('png'))
  }
  return { saveCsv, saveSvg, savePng }
}

interface Paper { text: string, width: number, height: number }

/** A copy with every colour and size written into it: tokens are resolved as light, whatever the page shows. */
function onPaper(drawing: SVGSVGElement, figure: FigureSpec): Paper {
  const stage = document.createElement('div')
  stage.style.cssText = 'position:fixed;left:-10000px;top:0;color-scheme:light;color:var(--ink);background:white'
  const copy = drawing.cloneNode(true) as SVGSVGElement
  stage.append(copy)
  document.body.append(stage)
  const [width, height] = [Number(drawing.getAttribute('width')), Number(drawing.getAttribute('height'))]
  for (const element of copy.querySelectorAll<SVGElement>('*')) writeStyle(element)
  stage.remove()
  dress(copy, figure, { width, height })
  return { text: `<?xml version="1.0" encoding="UTF-8"?>\n${new XMLSerializer().serializeToString(copy)}`, width: width + 2 * MARGIN_px, height: height + MARGIN_px + FOOT_px }
}

function writeStyle(element: SVGElement): void {
  const style = getComputedStyle(element)
  const painted = PAINTED.map(name => `${name}:${style.getPropertyValue(name)}`).join(';')
  for (const name of ['class', 'style', 'fill', 'stroke', 'opacity', 'fill-opacity']) element.removeAttribute(name)
  element.setAttribute('style', painted)
}

/** Title, description, white ground, and the caution in the foot. */
function dress(copy: SVGSVGElement, figure: FigureSpec, { width, height }: { width: number, height: number }): void {
  const make = (name: string, attributes: Record<string, string>, text = ''): SVGElement => {
    const element = document.createElementNS('http://www.w3.org/2000/svg', name)
    for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value)
    element.textContent = text
    return element
  }
  const [left, top, wide, high] = [-MARGIN_px, -MARGIN_px, width + 2 * MARGIN_px, height + MARGIN_px + FOOT_px]
  for (const name of ['class', 'style', 'aria-label', 'aria-describedby', 'role']) copy.removeAttribute(name)
  copy.setAttribute('xmlns', 'http://www.w3.org/2000/svg')
  copy.setAttribute('viewBox', `${left} ${top} ${wide} ${high}`)
  copy.setAttribute('width', String(wide))
  copy.setAttribute('height', String(high))
  copy.prepend(
    make('title', {}, plainNotation(figure.title)), make('desc', {}, plainNotation(figure.text)),
    make('rect', { x: String(left), y: String(top), width: String(wide), height: String(high), fill: '#ffffff' }),
  )
  copy.append(make('text', { x: '0', y: String(height + FOOT_px - 8), style: 'font-size:9px;font-family:"Fira Sans",sans-serif;fill:#44524e' }, CAUTION))
}

async function rasterise({ text, width, height }: Paper): Promise<Blob> {
  const image = new Image()
  const url = URL.createObjectURL(new Blob([text], { type: 'image/svg+xml' }))
  try {
    image.src = url
    await image.decode()
    const canvas = document.createElement('canvas')
    canvas.width = Math.round(width * PNG_SCALE)
    canvas.height = Math.round(height * PNG_SCALE)
    canvas.getContext('2d')?.drawImage(image, 0, 0, canvas.width, canvas.height)
    return await new Promise<Blob>((resolve, reject) => { canvas.toBlob(blob => blob ? resolve(blob) : reject(new Error('The picture could not be written.')), 'image/png') })
  }
  finally {
    URL.revokeObjectURL(url)
  }
}

/** Hands a file to the browser to keep. */
export function saveFile(blob: Blob, name: string): void {
  const link = document.createElement('a')
  link.href = URL.createObjectURL(blob)
  link.download = name
  link.click()
  setTimeout(() => URL.revokeObjectURL(link.href), 10_000)
}
