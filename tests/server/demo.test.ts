import { spawn } from 'node:child_process'
import { once } from 'node:events'
import { mkdtemp, readFile, readdir, rm } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { text } from 'node:stream/consumers'
import { setTimeout as delay } from 'node:timers/promises'
import { fileURLToPath } from 'node:url'
import { afterAll, describe, expect, it } from 'vitest'
import { demoFileText } from '../../db/seeds/demo/forward'
import { emptyHalfLoaded, isHalfLoaded } from '../../db/seeds/demo/halfLoaded'
import { loadDemo } from '../../db/seeds/demo/loadDemo'
import { DEMO_FILES, TRY_FILE } from '../../db/seeds/demo/series'
import { DEMO_TITRATIONS, titrationText } from '../../db/seeds/demo/titrations'
import { countJobs } from '../../server/queries/jobs'
import { countPersons } from '../../server/queries/persons'
import { listDecisions } from '../../server/services/showDecision'
import { listQueue } from '../../server/services/showCheck'
import { showMap } from '../../server/services/showMap'
import { verifyAudit } from '../../server/services/verifyAudit'
import { toAgentEvidence } from '../../shared/evidence/agentEvidence'
import { placeAgents } from '../../shared/science/placement/place'
import { makeOwnDeps } from '../support/ownSchema'

const folder = new URL('../../fixtures/demo/', import.meta.url)

describe('raw files of the demonstration', () => {
  it('are what the seeded script writes, byte for byte', async () => {
    const files = [...[...DEMO_FILES, TRY_FILE].map(file => ({ fileName: file.fileName, text: demoFileText(file) })), ...DEMO_TITRATIONS.map(file => ({ fileName: file.fileName, text: titrationText(file) }))]
    expect((await readdir(folder)).sort()).toEqual(files.map(one => one.fileName).sort())
    for (const file of files) expect(await readFile(new URL(file.fileName, folder), 'utf8'), file.fileName).toBe(file.text)
  })
})

describe('the demonstration', () => {
  const opened = makeOwnDeps()
  afterAll(async () => (await opened).close())

  it('loads through the services into an empty database: agents, signed evidence, decisions, a moved ground, whole audit chains', async () => {
    const deps = await opened
    const institute = await loadDemo(deps, async fileName => new Uint8Array(await readFile(new URL(fileName, folder))))
    const { programmeId } = institute
    const map = await showMap(deps, { programmeId, scope: 'programme' })
    expect(map.agents).toHaveLength(16)
    const placed = placeAgents(map.agents.map(agent => toAgentEvidence(agent, agent.evidence)), map.profiles[0]!.payload, { includeUnsigned: true })
    const lane = (code: string) => placed.find(one => one.code === code)!.lane
    expect(placed.filter(one => one.lane === 'plane').length).toBeGreaterThanOrEqual(10)
    expect([lane('SK-08'), lane('SK-15'), lane('SK-16')]).toEqual(['neither', 'concentrationMissing', 'lossMissing'])
    const { value } = map.agents.find(agent => agent.code === 'SK-05')!.evidence.find(item => item.quantity === 'logK' && item.origin.kind === 'fit')!
    expect(Math.abs(value.value - 13.1)).toBeLessThan(3 * value.se!)
    expect(placed.find(one => one.code === 'SK-11')!.loss_frac!.kind).toBe('<')
    expect(placed.find(one => one.code === 'SK-06')!.limits.find(one => one.key === 'freeMetal')!.outcome).toBe('over')
    expect(placed.find(one => one.code === 'SK-10')!.split.length).toBeGreaterThan(1)
    const { decisions } = await listDecisions(deps, { programmeId, isStaff: true })
    expect(decisions.map(one => [one.agent, one.outcome])).toEqual([['SK-02', 'stop'], ['SK-10', 'hold'], ['SK-07', 'advance'], ['SK-06', 'hold']])
    expect(decisions.find(one => one.agent === 'SK-10')!.groundMoved).toBeGreaterThan(0)
    expect(await verifyAudit(deps, programmeId)).toMatchObject({ whole: true })
    expect(await listQueue(deps, { actor: institute.people.oren, programmeId })).not.toHaveLength(0)
    expect((await countJobs(deps.db)).parked).toBe(0)
    await expect(loadDemo(deps, async () => new Uint8Array())).rejects.toThrow('empty database')
  }, 120_000)

  it('clears away what a load leaves that is killed, with the owner\'s account, before anybody is let in', async () => {
    const deps = await makeOwnDeps()
    const env = { ...process.env, DATABASE_URL: deps.databaseUrl, DATABASE_MIGRATION_URL: deps.databaseMigrationUrl, SMTP_URL: 'smtp://127.0.0.1:9', LANTHORN_STORAGE: await mkdtemp(join(tmpdir(), 'lanthorn-demo-')) }
    const begin = (...words: string[]) => spawn(process.execPath, ['--import', 'tsx', 'scripts/loadDemo.ts', ...words], { cwd: fileURLToPath(new URL('../..', import.meta.url)), env, stdio: ['ignore', 'pipe', 'inherit'] })
    try {
      const killed = begin()
      const end = once(killed, 'close')
      while (await countPersons(deps.db) === 0 && killed.exitCode === null) await delay(20)
      killed.kill('SIGKILL')
      expect(await end).toEqual([null, 'SIGKILL'])
      expect(await isHalfLoaded(deps.db)).toBe(true)
      const second = begin('--look')
      const said = await text(second.stdout)
      expect(JSON.parse(said.trim().split('\n').at(-1)!)).toEqual({ loaded: false, accounts: [] })
      expect(await isHalfLoaded(deps.db)).toBe(false)
      expect(await countPersons(deps.db)).toBe(0)
    }
    finally {
      await rm(env.LANTHORN_STORAGE, { recursive: true, force: true })
      await deps.close()
    }
  }, 120_000)

  it('says what is missing when the owner\'s account is not given', async () => {
    await expect(emptyHalfLoaded(undefined)).rejects.toThrow('DATABASE_MIGRATION_URL')
  })
})
