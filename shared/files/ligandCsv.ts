import type { LigandChoiceDto, LigandChoiceRow, LigandValueDto } from '../schemas/ligandChoice'
import { HINT_TOPICS } from '../schemas/ligandChoice'
import { CAUTION } from '../caution'
import { plainNotation } from '../notation'
import { csvText } from './csv'

/** A sign of its own would be read as the beginning of a formula. */
const KIND_WORDS = { '=': 'value', '<': 'less than', '>': 'more than' } as const
type Cell = string | number | null

const TOPICS = { size: 'Size', hardness: 'Donor hardness', denticity: 'Sites', charge: 'Charge', shape: 'Ring or chain' } as const satisfies Record<(typeof HINT_TOPICS)[number], string>
const HEAD = [
  'Ligand', 'Name', 'Origin', 'Donors', 'Denticity', 'Ring atoms', 'Charge of the ligand', 'Charge of the complex', ...HINT_TOPICS.flatMap(topic => [TOPICS[topic], `${TOPICS[topic]}, reason`]),
  'log K, kind', 'log K', 'log K, SE', 'log K, state', 'log K, conditions', 'log K, source', 'Sum of pKa', 'Sum of pKa, constants', 'Sum of pKa, conditions', 'log K, estimate', 'Estimate, lower end (95 %)', 'Estimate, upper end (95 %)',
  'Half-lives in acid', 'Time to 99 % formed', 'Half-life at the profile, kind', 'Half-life at the profile (s)', 'Half-life at the profile, SE (s)', 'Half-life at the profile, state', 'Not known', 'Notes',
]

/** The comparison as a CSV file: every ligand in a row, reasons in words, bounds and estimates told from values. */
export function ligandCsv(answer: LigandChoiceDto): string {
  const lines = [
    `Ligands for ${answer.ion}, coordination number ${answer.coordination}, ${answer.waters} left to water; half-lives at ${answer.profile}`, answer.line, ...answer.constants, ...answer.disagreements, CAUTION,
  ]
  return csvText([HEAD, ...answer.ligands.map(toCells), ...lines.map(line => [`# ${plainNotation(line)}`])])
}

const numberCells = (value: LigandValueDto['value'] | undefined): Cell[] => value ? [KIND_WORDS[value.kind], value.value, value.se] : ['not known', null, null]

function toCells(row: LigandChoiceRow): Cell[] {
  const { logK, sumPKa, estimate, halfLife } = row
  return [
    row.code, row.name, row.origin, row.donors, row.denticity, row.topology === 'openChain' ? 'open chain' : row.ringAtoms ?? 'ring, size not known', row.charge, row.complexCharge,
    ...HINT_TOPICS.flatMap((topic): Cell[] => { const hint = row.hints.find(one => one.about === topic); return [hint?.leaning ?? '', hint?.reason ?? ''] }),
    ...numberCells(logK?.value), logK ? logK.state ?? 'literature' : '', plainNotation(logK?.conditions ?? ''), logK?.source ?? '',
    sumPKa?.value ?? null, sumPKa?.steps ?? null, plainNotation(sumPKa?.conditions ?? ''), estimate?.logK ?? null, estimate?.low ?? null, estimate?.high ?? null,
    plainNotation(row.acidHalfLives.map(one => `${one.value.kind === '=' ? '' : KIND_WORDS[one.value.kind]} ${one.value.value} s (${one.conditions}; ${one.state ?? `literature: ${one.source ?? ''}`})`.trim()).join(' | ')),
    row.formation === null ? '' : plainNotation(`${row.formation.value.kind === '=' ? '' : KIND_WORDS[row.formation.value.kind]} ${row.formation.value.value} s (${row.formation.conditions}; ${row.formation.state ?? `literature: ${row.formation.source ?? ''}`})`.trim()),
    ...numberCells(halfLife?.value), halfLife?.state ?? '', row.unknown?.join(', ') ?? '', [...row.notes, ...(estimate?.warnings ?? [])].join(' '),
  ]
}
