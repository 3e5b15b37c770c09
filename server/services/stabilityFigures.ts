import type { EvidenceItemDto } from '../../shared/evidence/item'
import { formatCelsius, formatNumber } from '../../shared/format'
import type { FigureDash, FigureLayer, FigureSpec, FigureToken } from '../../shared/schemas/figure'
import { conditionalConstant } from '../../shared/science/equilibria/conditional'
import { evaluateRateLaw, type RateLaw } from '../../shared/science/kinetics/rateLaw'
import { rateConditionsOf, rateLawOf } from '../../shared/science/placement/kinetic'
import { indexEvidence } from '../../shared/science/placement/read'
import type { ScreeningProfile } from '../../shared/science/placement/profile'
import type { AgentView } from './agentView'

const PH_GRID = Array.from({ length: 101 }, (_, k) => 2 + k / 10)
const BLOOD_PH = 7.4
const METAL_TOKENS: readonly FigureToken[] = ['ink', 's2', 's3', 's4', 's5']

/** Conditional constants against pH: the metal of the agent and the competitors that are known. Null without protonation constants. */
export function conditionalFigure({ evidence, payload, row }: AgentView): FigureSpec | null {
  const own = newest(evidence, 'logK')
  const protonation = own?.detail.protonation
  if (!own || !Array.isArray(protonation) || protonation.length === 0) return null
  const ligands = [own, ...['Ca', 'Mg', 'Zn', 'Cu'].flatMap(metal => newest(evidence, `logK${metal}`) ?? [])]
  const curves = ligands.map((item, k) => {
    const metal = k === 0 ? payload.metal : String(item.detail.metal)
    const at = (pH: number): number => conditionalConstant({ logK: item.value.value, ligandProtonation: protonation }, pH).logKCond
    return { metal, token: METAL_TOKENS[k] ?? 'ink-2', points: PH_GRID.map(x => ({ x, y: at(x) })), atBlood: at(BLOOD_PH), isDashed: item.value.kind !== '=' }
  })
  const layers: FigureLayer[] = [
    { type: 'rule', name: `pH ${BLOOD_PH}`, axis: 'x', at: BLOOD_PH, dash: 'dotted' },
    ...curves.map(({ metal, token, points, isDashed }, k): FigureLayer => ({ type: 'line', name: `${metal}L`, token, points, ...(isDashed || k > 2 ? { dash: 'dashed' as const } : {}) })),
    { type: 'points', name: `${payload.metal}L at pH ${BLOOD_PH}`, token: 'ink', points: [{ x: BLOOD_PH, y: curves[0]!.atBlood }] },
  ]
  return {
    id: 'conditional', title: 'Conditional constant against pH', x: { label: 'pH', unit: null, scale: 'linear', domain: [2, 12] }, y: { label: 'log K_{cond}', unit: null, scale: 'linear' }, layers,
    text: `Conditional constants of ${row.code} between pH 2 and 12. At pH ${BLOOD_PH}: ${curves.map(one => `${one.metal} ${one.atBlood.toFixed(2)}`).join(', ')}.`,
    caption: 'Side reactions with protons only; pH taken as −log [H^{+}]. Dashed: a bound, or a competing metal beyond the second.',
    table: {
      columns: [{ key: 'pH', label: 'pH', unit: null, numeric: true }, ...curves.map(one => ({ key: one.metal, label: `log K_{cond} ${one.metal}L`, unit: null, numeric: true }))],
      rows: PH_GRID.filter((_, k) => k % 5 === 0).map(x => ({ pH: x, ...Object.fromEntries(curves.map(one => [one.metal, Math.round(one.points[PH_GRID.indexOf(x)]!.y * 100) / 100])) })),
    },
  }
}

/** The rate against pH at the profile's temperature and competitors: solid over the measured range, dashed beyond it. Null without a rate law. */
export function rateFigure({ placement, row }: AgentView, profile: ScreeningProfile, includeUnsigned: boolean): FigureSpec | null {
  const found = rateLawOf(indexEvidence(placement.evidence, includeUnsigned), profile)
  if (!found) return null
  const conditions = rateConditionsOf(profile)
  const at = (pH: number) => evaluateRateLaw(found.law, { ...conditions, pH })
  const here = at(profile.pH)
  if (!here.ok) return null
  const points = Array.from({ length: 91 }, (_, k) => k / 10).flatMap((x) => {
    const rate = at(x)
    return rate.ok ? [{ x, y: rate.value, kind: rate.kind }] : []
  })
  const range = measuredRange(found.law)
  const inRange = (x: number): boolean => range !== null && x >= range[0] - 1e-9 && x <= range[1] + 1e-9
  /** A bound is a line of its own: it does not go on where the values end. */
  const curve = (name: string, dash: FigureDash, belongs: (point: (typeof points)[number]) => boolean): FigureLayer =>
    ({ type: 'line', name, token: 'ink', dash, labelled: false, points: points.filter(belongs).map(({ x, y }) => ({ x, y })) })
  const layers: FigureLayer[] = [
    { type: 'rule', name: `pH ${formatNumber(profile.pH)}`, axis: 'x', at: profile.pH, dash: 'dotted' },
    curve('extrapolated', 'dashed', ({ kind }) => kind === '='),
    curve('measured', 'solid', ({ x, kind }) => kind === '=' && inRange(x)),
    curve('at most', 'dotted', ({ kind }) => kind === '<'),
    curve('at least', 'dotted', ({ kind }) => kind === '>'),
    ...(here.interval && here.interval[0] > 0 ? [{ type: 'errorBars' as const, name: '95 %', token: 'ink' as const, points: [{ x: profile.pH, y: here.value, low: here.interval[0], high: here.interval[1] }] }] : []),
    { type: 'points', name: here.kind === '=' ? 'at the profile' : here.kind === '<' ? 'at the profile, at most' : 'at the profile, at least', token: 'ink', open: here.kind !== '=', points: [{ x: profile.pH, y: here.value }] },
  ]
  const place = `${formatCelsius(profile.temperature_K, 0)}, exchangeable Zn ${formatNumber(profile.exchangeableZn_uM)} µM, Cu ${formatNumber(profile.exchangeableCu_uM)} µM`
  return {
    id: 'rate', title: 'Rate of dissociation against pH', x: { label: 'pH', unit: null, scale: 'linear', domain: [0, 9] }, y: { label: 'k_{obs}', unit: 's^-1', scale: 'log' }, layers: layers.filter(layer => layer.type !== 'line' || layer.points.length > 0),
    text: `Dissociation rate of ${row.code} between pH 0 and 9 (${place}). ${range ? `Measured from pH ${range[0]} to ${range[1]}; dashed beyond.` : 'The measured range is not stated: all of it is drawn dashed.'}`,
    caption: `${place}. Dashed: outside the measured pH range. Dotted, and an open point: a bound. Bar: 95 %.`,
    table: {
      columns: [{ key: 'pH', label: 'pH', unit: null, numeric: true }, { key: 'k', label: 'k_{obs}', unit: 's^-1', numeric: true }, { key: 'how', label: 'How', unit: null, numeric: false }],
      rows: points.filter((_, k) => k % 5 === 0).map(({ x, y, kind }) => ({ pH: x, k: Number(y.toPrecision(3)), how: `${inRange(x) ? 'measured range' : 'extrapolated'}${kind === '=' ? '' : kind === '<' ? ', at most' : ', at least'}` })),
    },
  }
}

function measuredRange({ constants }: RateLaw): [number, number] | null {
  const known = constants.filter(one => one.pHMin !== null && one.pHMax !== null)
  return known.length === 0 ? null : [Math.min(...known.map(one => one.pHMin!)), Math.max(...known.map(one => one.pHMax!))]
}

function newest(evidence: readonly EvidenceItemDto[], quantity: string): EvidenceItemDto | undefined {
  const all = evidence.filter(item => item.quantity === quantity)
  return all.filter(item => item.signed).at(-1) ?? all.at(-1)
}
