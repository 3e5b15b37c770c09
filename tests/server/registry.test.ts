import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { AppError } from '../../shared/errors'
import { RegisterAgentInput } from '../../shared/schemas/agent'
import { readChain } from '../../server/queries/audit'
import { addAgentVersion } from '../../server/services/addAgentVersion'
import { listAgents } from '../../server/services/listAgents'
import { listLigands } from '../../server/services/listLigands'
import { addBatchVersion, registerBatch } from '../../server/services/registerBatch'
import { registerAgent } from '../../server/services/registerAgent'
import { showAgent } from '../../server/services/showAgent'
import { makeDeps, makeProgramme, type TestDeps, type TestProgramme } from '../support/factory'
import { agentBody, CHAIN, register, sign } from '../support/registry'

let deps: TestDeps
let programme: TestProgramme
beforeAll(() => { deps = makeDeps() })
afterAll(() => deps.close())
beforeEach(async () => { programme = await makeProgramme(deps) })

const errorOf = async (act: Promise<unknown>): Promise<AppError> => {
  const outcome = await act.then(() => null, (error: unknown) => error)
  if (!(outcome instanceof AppError)) throw new Error(`no AppError but ${String(outcome)}`)
  return outcome
}
const show = (code: string, scope: 'programme' | 'signed' = 'programme', at = programme) => showAgent(deps, { programmeId: at.id, code, scope })

describe('registering an agent', () => {
  it('makes ligand, complex and batch in one command and shows them with a drawing', async () => {
    await register(deps, programme, { code: 'SK-07', metal: 'Gd' })
    const shown = await show('SK-07')
    expect(shown.agent).toMatchObject({ code: 'SK-07', metal: 'Gd', mechanism: 'T1', topology: 'ring', version: { versionNo: 1, by: programme.people.chemist.name } })
    expect(shown.ligand).toMatchObject({ code: 'SK-07-L', payload: { denticity: 8, charge: -4 } })
    expect(shown.batches.map(one => [one.lot, one.current?.payload.hplcPurity_frac])).toEqual([['L1', 0.985]])
    expect(shown.drawing?.atoms).toHaveLength(28)
    expect(shown.formula).toBe('C16H28N4O8')
  })

  it('leaves nothing behind when one part is refused: no ligand without its complex', async () => {
    await register(deps, programme, { code: 'SK-07' })
    const error = await errorOf(register(deps, programme, { code: 'SK-07', ligandCode: 'other-L' }))
    expect(error.code).toBe('conflict')
    expect((await listLigands(deps, { programmeId: programme.id })).ligands.map(one => one.code)).toEqual(['SK-07-L'])
  })

  it('says who has a code and when', async () => {
    await register(deps, programme, { code: 'SK-07' })
    const error = await errorOf(register(deps, programme, { code: 'SK-07', ligandCode: 'L2' }))
    expect(error.details).toMatchObject({ field: 'complex.code', accepted: expect.any(String) as string, data: { personName: programme.people.chemist.name, at: deps.clock.now().toISOString() } })
    const ligand = await errorOf(register(deps, programme, { code: 'SK-08', ligandCode: 'SK-07-L' }))
    expect(ligand.details.field).toBe('ligand.code')
  })

  it('lets two people race for one code: one gets it, the other a conflict with the name', async () => {
    const outcomes = await Promise.allSettled([1, 2, 3].map(n => register(deps, programme, { code: 'SK-09', ligandCode: `L-${n}` })))
    expect(outcomes.filter(one => one.status === 'fulfilled')).toHaveLength(1)
    for (const one of outcomes) if (one.status === 'rejected') expect((one.reason as AppError).details.data).toHaveProperty('personName', programme.people.chemist.name)
    expect((await listLigands(deps, { programmeId: programme.id })).ligands).toHaveLength(1)
  })

  it('answers the same for the same idempotency key and registers once', async () => {
    const command = { actor: programme.people.chemist, programmeId: programme.id, body: agentBody(), idempotency: { key: 'key-12345678', request: agentBody() } }
    expect(await registerAgent(deps, command)).toEqual(await registerAgent(deps, command))
    expect((await listAgents(deps, { programmeId: programme.id, scope: 'programme' })).agents).toHaveLength(1)
  })

  it('uses a ligand that is registered for a second metal', async () => {
    await register(deps, programme, { code: 'SK-01', ligandCode: 'L-A' })
    await register(deps, programme, { code: 'SK-02', ligandCode: 'L-A', ligandIsRegistered: true, metal: 'Eu', mechanism: 'CEST' })
    expect((await show('SK-02')).ligand.code).toBe('L-A')
    const error = await errorOf(register(deps, programme, { code: 'SK-03', ligandCode: 'L-B', ligandIsRegistered: true }))
    expect([error.code, error.details.field]).toEqual(['notFound', 'ligand.code'])
  })

  it('refuses a structure that cannot be drawn, on its own field', async () => {
    const error = await errorOf(register(deps, programme, { smiles: 'C1CC(' }))
    expect(error.details).toMatchObject({ field: 'ligand.payload.smiles', accepted: expect.stringContaining('SMILES') as string })
  })

  it('writes one link of the audit trail with what was registered', async () => {
    const { complexId } = await register(deps, programme, { code: 'SK-11' })
    const last = (await readChain(deps.db, programme.id, 0, 100)).at(-1)!
    expect([last.command, last.subject]).toEqual(['registerAgent', `complex ${complexId}`])
    expect(last.payload).toContain('SK-11')
  })
})

describe('versions', () => {
  beforeEach(() => register(deps, programme, { code: 'SK-07' }))
  const complexPayload = (q: number) => ({ ...agentBody().complex.payload, q })

  it('append: the first stays beside the second', async () => {
    await addAgentVersion(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'SK-07', body: { part: 'complex', basedOn: 1, payload: complexPayload(0.9), reason: 'measured again at 25 °C' } })
    const { agent } = await show('SK-07')
    expect([agent.payload.q, agent.versions.map(one => one.versionNo)]).toEqual([0.9, [2, 1]])
  })

  it('conflict when based on an older one, naming who and when', async () => {
    const add = (q: number) => addAgentVersion(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'SK-07', body: { part: 'complex', basedOn: 1, payload: complexPayload(q), reason: 'measured again at 25 °C' } })
    const outcomes = await Promise.allSettled([add(1.1), add(1.2)])
    expect(outcomes.map(one => one.status).sort()).toEqual(['fulfilled', 'rejected'])
    const { reason } = outcomes.find(one => one.status === 'rejected')!
    expect((reason as AppError).details.data).toMatchObject({ personName: programme.people.chemist.name })
  })

  it('of a ligand are seen by every agent that has it', async () => {
    await register(deps, programme, { code: 'SK-08', ligandCode: 'SK-07-L', ligandIsRegistered: true })
    const ligand = agentBody().ligand
    if (ligand.kind !== 'new') throw new Error('the body holds a new ligand')
    await addAgentVersion(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'SK-07', body: { part: 'ligand', basedOn: 1, payload: { ...ligand.payload, name: 'renamed ligand' }, reason: 'the name was misspelt' } })
    expect((await show('SK-08')).ligand.payload.name).toBe('renamed ligand')
  })
})

describe('batches and their free metal', () => {
  const found = { kind: '=', value_frac: 4e-4, se_frac: 1e-4, detectionLimit_frac: 1e-4, method: 'colorimetry' }
  const notFound = { kind: '<', value_frac: 1e-4, detectionLimit_frac: 1e-4, method: 'colorimetry' }

  it('emit evidence that waits for a check like a fit does', async () => {
    const { batchVersionId } = await register(deps, programme, { code: 'SK-07', freeMetal: found })
    const before = await show('SK-07')
    expect(before.evidence).toEqual([expect.objectContaining({ quantity: 'freeMetal_frac', signed: false, checkState: 'draft', value: expect.objectContaining({ value: 4e-4, kind: '=', se: 1e-4 }) as unknown })])
    await sign(deps, programme, 'batchVersion', batchVersionId)
    expect((await show('SK-07')).evidence[0]).toMatchObject({ signed: true, checkState: 'signed' })
  })

  it('below the detection limit are "less than" the limit, never zero', async () => {
    await register(deps, programme, { code: 'SK-07', freeMetal: notFound })
    expect((await show('SK-07')).evidence[0]!.value).toMatchObject({ kind: '<', value: 1e-4, se: null })
  })

  it('not measured make no evidence and a gap that says who could measure it', async () => {
    await register(deps, programme, { code: 'SK-07' })
    const { evidence, gaps } = await show('SK-07')
    expect(evidence).toEqual([])
    expect(gaps).toContainEqual(expect.objectContaining({ what: expect.stringContaining('free metal') as string, who: expect.stringMatching(/colorimetry/) as string }))
  })

  it('are added to an agent, each lot once', async () => {
    await register(deps, programme, { code: 'SK-07' })
    const add = () => registerBatch(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'SK-07', lot: 'L2', payload: agentBody().batch.payload })
    await add()
    const error = await errorOf(add())
    expect([error.code, error.details.field]).toEqual(['conflict', 'lot'])
    expect((await show('SK-07')).batches.map(one => one.lot).sort()).toEqual(['L1', 'L2'])
  })

  it('change by versions: the newest signed one counts until the next is signed', async () => {
    const { batchVersionId } = await register(deps, programme, { code: 'SK-07', freeMetal: found })
    await sign(deps, programme, 'batchVersion', batchVersionId)
    const payload = agentBody({ freeMetal: notFound }).batch.payload
    const second = await addBatchVersion(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'SK-07', lot: 'L1', basedOn: 1, payload })
    expect((await show('SK-07')).evidence.map(one => one.value.kind)).toEqual(['='])
    await sign(deps, programme, 'batchVersion', second.id)
    expect((await show('SK-07')).evidence.map(one => one.value.kind)).toEqual(['<'])
  })
})

describe('who sees an agent', () => {
  it('nobody of another programme; a stranger\'s agent answers like one that does not exist', async () => {
    const other = await makeProgramme(deps)
    await register(deps, programme, { code: 'SK-07' })
    const [stranger, missing] = await Promise.all([errorOf(show('SK-07', 'programme', other)), errorOf(show('SK-99', 'programme', other))])
    expect([stranger.code, stranger.message]).toEqual([missing.code, missing.message])
    expect((await listAgents(deps, { programmeId: other.id, scope: 'programme' })).agents).toEqual([])
  })

  it('two programmes may use one code', async () => {
    const other = await makeProgramme(deps)
    await register(deps, programme, { code: 'SK-07' })
    await register(deps, other, { code: 'SK-07', smiles: CHAIN, topology: 'openChain' })
    expect([(await show('SK-07')).agent.topology, (await show('SK-07', 'programme', other)).agent.topology]).toEqual(['ring', 'openChain'])
  })

  it('a partner sees no agent without a signed value, and of the others no gaps and no unsigned batch', async () => {
    const found = { kind: '=', value_frac: 4e-4, se_frac: 1e-4, detectionLimit_frac: 1e-4, method: 'colorimetry' }
    const { batchVersionId } = await register(deps, programme, { code: 'SK-07', freeMetal: found })
    expect((await errorOf(show('SK-07', 'signed'))).code).toBe('notFound')
    expect((await listAgents(deps, { programmeId: programme.id, scope: 'signed' })).agents).toEqual([])
    await sign(deps, programme, 'batchVersion', batchVersionId)
    await registerBatch(deps, { actor: programme.people.chemist, programmeId: programme.id, code: 'SK-07', lot: 'L2', payload: agentBody({ freeMetal: found }).batch.payload })
    const seen = await show('SK-07', 'signed')
    expect([seen.gaps, seen.batches.map(one => [one.lot, one.current !== null]).sort()]).toEqual([null, [['L1', true], ['L2', false]]])
    expect((await listAgents(deps, { programmeId: programme.id, scope: 'signed' })).agents.map(one => [one.code, one.gaps])).toEqual([['SK-07', null]])
  })
})

describe('the form\'s refusals', () => {
  const body = agentBody()
  it.each([
    ['purity of 130 %', { ...body, batch: { ...body.batch, payload: { ...body.batch.payload, purity_frac: 1.3 } } }, 'batch.payload.purity_frac'],
    ['purity and water above 102 %', { ...body, batch: { ...body.batch, payload: { ...body.batch.payload, water_frac: 0.2 } } }, 'batch.payload.water_frac'],
    ['free metal below its detection limit', agentish({ kind: '=', value_frac: 1e-5, detectionLimit_frac: 1e-4, method: 'colorimetry' }), 'batch.payload.freeMetal.value_frac'],
    ['q without its source', { ...body, complex: { ...body.complex, payload: { ...body.complex.payload, qSource: null } } }, 'complex.payload.qSource'],
    ['a metal that is no lanthanide', { ...body, complex: { ...body.complex, payload: { ...body.complex.payload, metal: 'Fe' } } }, 'complex.payload.metal'],
    ['a code with markup', { ...body, complex: { ...body.complex, code: '<b>SK' } }, 'complex.code'],
    ['a day that is none', { ...body, batch: { ...body.batch, payload: { ...body.batch.payload, date: '2026-02-31' } } }, 'batch.payload.date'],
    ['a charge of a half', { ...body, complex: { ...body.complex, payload: { ...body.complex.payload, charge: 0.5 } } }, 'complex.payload.charge'],
  ])('%s: the field and what is accepted', (_, input, path) => {
    const issue = RegisterAgentInput.safeParse(input).error?.issues.find(one => one.path.join('.') === path)
    expect(issue?.message).toMatch(/Accepted: |must be a whole number/)
  })
  function agentish(freeMetal: unknown) { return { ...body, batch: { ...body.batch, payload: { ...body.batch.payload, freeMetal } } } }
})
