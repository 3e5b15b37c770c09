/** A unit where nothing can be raised, as in the browser's own list: `M^-1 s^-1` as 1/(M s), `M^-2 s^-1` as 1/(M² s). */
export function unitOnOneLine(symbol: string): string {
  const factors = symbol.split(' ').map(factor => /^(.+)\^-(\d)$/.exec(factor))
  const below = factors.flatMap(match => match ? [`${match[1]}${match[2] === '1' ? '' : match[2] === '2' ? '²' : '³'}`] : [])
  if (below.length === 0 || below.length !== factors.length) return symbol
  return `1/${below.length > 1 ? `(${below.join(' ')})` : below[0]}`
}
