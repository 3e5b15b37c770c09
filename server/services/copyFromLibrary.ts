import { AppError } from '../../shared/errors'
import type { LibraryLigand, LibraryRecord } from '../../shared/library/define'
import { libraryLigand } from '../../shared/library/index'
import type { Actor } from '../../shared/permissions'
import { ComplexPayload } from '../../shared/schemas/agent'
import type { LibraryCopied, LibraryCopyInput } from '../../shared/schemas/library'
import { LigandPayload } from '../../shared/schemas/ligand'
import { LANTHANIDES, METAL_CHARGE } from '../../shared/schemas/metal'
import { canonicalJson } from '../../shared/science/canonical'
import type { Deps } from '../platform/deps'
import { findComplex, insertComplex, type ComplexRow } from '../queries/complexes'
import { findLigand, insertLigand } from '../queries/ligands'
import { listRecordRows } from '../queries/records'
import { insertVersion, readVersions } from '../queries/versions'
import { kindOf, storeRecordVersion } from './enterRecord'
import { proposeFromSmiles } from './proposeFromSmiles'
import { noSuchAgent, orTaken, takenBy } from './registryWords'
import { unitOfWork, type Work } from './unitOfWork'

export interface CopyFromLibraryCommand { actor: Actor, programmeId: string, body: LibraryCopyInput, idempotency?: { key: string, request: unknown } | undefined }
interface Place { programmeId: string, actor: Actor }

/**
 * Copies a ligand of the starter library, an agent made of it, or records, into a programme, in one transaction. Copied records are drafts like typed ones: the citation is
 * their source, and the same check stands between them and the map.
 * @throws AppError('notFound') for a ligand or record that the library does not have, or an agent that the programme does not; AppError('conflict') for a code that is
 * taken or a record that was copied before; AppError('invalidInput') where metal or structure do not fit
 */
export async function copyFromLibrary(deps: Deps, { actor, programmeId, body, idempotency }: CopyFromLibraryCommand): Promise<LibraryCopied> {
  const ligand = libraryLigand(body.ligand)
  if (!ligand) throw new AppError('notFound', 'The starter library has no such ligand.', { field: 'ligand' })
  const records = recordsOf(ligand, body)
  const place = { programmeId, actor }
  return await unitOfWork(deps, { actor, name: 'copyFromLibrary', programmeId, idempotency }, async (work) => {
    const { into } = body
    const ligandId = into.kind === 'agent' ? null : await addLigand(work, place, into.ligandCode, ligand)
    const complex = into.kind === 'ligand' ? null : into.kind === 'newAgent' ? await addAgent(work, place, { ...into, ligand, ligandId: ligandId! }) : await fittingAgent(work, place, { code: into.agentCode, ligand })
    const ids = complex ? await addRecords(work, place, complex, records) : []
    const result = { ligand: into.kind === 'agent' ? complex!.ligandCode : into.ligandCode, agent: complex?.code ?? null, records: ids }
    return { result, subject: complex ? `complex ${complex.id}` : `ligand ${ligandId}`, payload: { ...body, ids } }
  })
}

function recordsOf(ligand: LibraryLigand, { records, into }: LibraryCopyInput): LibraryRecord[] {
  if (into.kind === 'ligand' && records.length > 0) throw new AppError('invalidInput', 'Records belong to an agent.', { field: 'records', accepted: 'no records with a ligand alone, or an agent to copy them to' })
  return [...new Set(records)].map((key) => {
    const found = ligand.records.find(one => one.key === key)
    if (!found) throw new AppError('notFound', `The starter library has no record "${key}" of this ligand.`, { field: 'records', accepted: ligand.records.map(one => one.key).join(', ') })
    return found
  })
}

async function addLigand(work: Work, { programmeId, actor }: Place, code: string, { payload }: LibraryLigand): Promise<string> {
  const id = work.id()
  await orTaken('code', () => insertLigand(work.trx, { id, programmeId, code, personId: actor.personId, at: work.now }), async () =>
    takenBy({ what: 'Ligand', code, field: 'into.ligandCode', by: await findLigand(work.trx, programmeId, { code }, { latest: true }) }))
  const kept = LigandPayload.parse({ ...payload, note: 'From the starter library.' })
  await insertVersion(work.trx, 'ligand', { id: work.id(), programmeId, parentId: id, versionNo: 1, payload: kept, personId: actor.personId, at: work.now })
  return id
}

interface NewAgent { agentCode: string, metal: keyof typeof LANTHANIDES, mechanism: ComplexPayload['mechanism'], ligand: LibraryLigand, ligandId: string }

/** A complex without a batch: literature speaks of the compound, not of anybody's lot. */
async function addAgent(work: Work, { programmeId, actor }: Place, { agentCode: code, metal, mechanism, ligand, ligandId }: NewAgent): Promise<ComplexRow> {
  const { deprotonatedMass_g_per_mol } = proposeFromSmiles(ligand.payload.smiles)
  const payload = ComplexPayload.parse({
    metal, q: null, qSource: null, molarMass_g_per_mol: Math.round((deprotonatedMass_g_per_mol + LANTHANIDES[metal].molarMass_g_per_mol) * 100) / 100, charge: METAL_CHARGE + ligand.payload.charge, mechanism, analogueNote: null,
  })
  const id = work.id()
  await orTaken('code', () => insertComplex(work.trx, { id, programmeId, code, ligandId, personId: actor.personId, at: work.now }), async () =>
    takenBy({ what: 'Agent', code, field: 'into.agentCode', by: await findComplex(work.trx, programmeId, { code }, { latest: true }) }))
  await insertVersion(work.trx, 'complex', { id: work.id(), programmeId, parentId: id, versionNo: 1, payload, personId: actor.personId, at: work.now })
  return (await findComplex(work.trx, programmeId, { id }))!
}

/** An agent of the programme whose ligand has the formula of the library's: constants of one ligand say nothing of another. */
async function fittingAgent(work: Work, { programmeId }: Place, { code, ligand }: { code: string, ligand: LibraryLigand }): Promise<ComplexRow> {
  const complex = await findComplex(work.trx, programmeId, { code })
  if (!complex) throw noSuchAgent()
  const [version] = await readVersions(work.trx, 'ligand', programmeId, complex.ligandId)
  const [own, published] = [proposeFromSmiles(LigandPayload.parse(version!.payload).smiles), proposeFromSmiles(ligand.payload.smiles)]
  const isSame = own.formula === published.formula && own.topology === published.topology && own.denticity === published.denticity
  if (!isSame) throw new AppError('invalidInput', `The ligand of ${code} is ${own.formula}, that of the library ${published.formula}.`, { field: 'into.agentCode', accepted: `an agent with ${ligand.payload.name}` })
  return complex
}

async function addRecords(work: Work, { programmeId, actor }: Place, complex: ComplexRow, records: readonly LibraryRecord[]): Promise<string[]> {
  const [version] = await readVersions(work.trx, 'complex', programmeId, complex.id)
  const { metal } = ComplexPayload.parse(version!.payload)
  const foreign = records.find(one => one.metal !== metal)
  if (foreign) throw new AppError('invalidInput', `The record is of ${foreign.metal}, ${complex.code} holds ${metal}.`, { field: 'records', accepted: `records of ${metal}` })
  const known = await listRecordRows(work.trx, programmeId, 'programme', complex.id)
  const ids: string[] = []
  for (const { kind, entry, source } of records) {
    const before = known.find(row => row.kind === kind && row.source.citation === source.citation && canonicalJson(row.payload.entry) === canonicalJson(entry))
    if (before) throw new AppError('conflict', `${complex.code} has this record already: ${before.personName} entered it.`, { field: 'records', accepted: 'records that were not copied before', data: { personName: before.personName, at: before.at.toISOString() } })
    const id = work.id()
    await storeRecordVersion(work, { programmeId, actor, kind: kindOf(kind), complex, lot: null, entry, source, id, rootId: id, versionNo: 1, replaces: null, reason: null })
    ids.push(id)
  }
  return ids
}
