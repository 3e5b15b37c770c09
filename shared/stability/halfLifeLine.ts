import type { HalfLifeDto } from '../schemas/stability'

const HOUR_S = 3600
const DAY_S = 86_400
const YEAR_S = 31_557_600
const TICKS: readonly { value_s: number, words: string }[] = [
  { value_s: 1, words: '1 s' }, { value_s: 60, words: '1 min' }, { value_s: HOUR_S, words: '1 h' }, { value_s: DAY_S, words: '1 d' }, { value_s: 30 * DAY_S, words: '1 mo' }, { value_s: YEAR_S, words: '1 y' },
  { value_s: 10 * YEAR_S, words: '10 y' }, { value_s: 100 * YEAR_S, words: '100 y' }, { value_s: 1e3 * YEAR_S, words: '1000 y' }, { value_s: 1e4 * YEAR_S, words: '10\u2009000 y' },
  { value_s: 1e6 * YEAR_S, words: 'a million y' },
]
/** Labels nearer than this, in percent of the line, go one row up. */
const LABEL_WIDTH = 5.2
const MOST_ROWS = 4

export interface HalfLifeMark { agent: HalfLifeDto, at: number, row: number, arrow: 'left' | 'right' | null }
export interface HalfLifeLine { marks: HalfLifeMark[], ticks: { at: number, words: string }[], residenceAt: number }

/** Places half-lives along a logarithmic line, in percent of its length, labels in rows so that none covers another. */
export function halfLifeLine(agents: readonly HalfLifeDto[], residence_s: number): HalfLifeLine {
  const known = agents.filter(agent => agent.halfLife.value.value > 0).sort((a, b) => a.halfLife.value.value - b.halfLife.value.value)
  const values = [...known.map(agent => agent.halfLife.value.value), residence_s].map(Math.log10)
  const [low, high] = [Math.min(...values) - 0.4, Math.max(...values) + 0.4]
  const place = (value_s: number): number => ((Math.log10(value_s) - low) / (high - low)) * 100
  const rowEnds: number[] = []
  const marks = known.map((agent) => {
    const at = place(agent.halfLife.value.value)
    const free = rowEnds.findIndex(end => at - end >= LABEL_WIDTH)
    const row = free >= 0 ? free : Math.min(rowEnds.length, MOST_ROWS - 1)
    rowEnds[row] = at
    const { kind } = agent.halfLife.value
    return { agent, at, row, arrow: kind === '>' ? 'right' as const : kind === '<' ? 'left' as const : null }
  })
  return { marks, ticks: TICKS.filter(({ value_s }) => Math.log10(value_s) > low && Math.log10(value_s) < high).map(({ value_s, words }) => ({ at: place(value_s), words })), residenceAt: place(residence_s) }
}

export function plainBound({ halfLife }: Pick<HalfLifeDto, 'halfLife'>): string {
  return halfLife.value.kind === '>' ? 'at least ' : halfLife.value.kind === '<' ? 'at most ' : ''
}
