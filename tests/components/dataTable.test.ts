import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import DataTable from '~/components/table/DataTable.vue'
import type { DataColumn } from '~/composables/useDataTable'

interface Row { code: string, r1: number | null, se: number | null, loss: number | null }
const rows: Row[] = [
  { code: 'SK-9', r1: 5.312, se: 0.061, loss: 2.1e-6 },
  { code: 'SK-10', r1: null, se: null, loss: null },
  { code: 'SK-2', r1: 15.7, se: 0.3, loss: 0.002 },
]
const columns: DataColumn<Row>[] = [
  { key: 'code', label: 'Agent', value: row => row.code },
  { key: 'r1', label: 'r_1, 3 T', unit: 'mM^-1 s^-1', kind: 'pair', value: row => row.r1, se: row => row.se },
  { key: 'loss', label: 'Loss', kind: 'number', value: row => row.loss, barred: row => row.code === 'SK-10' },
  { key: 'note', label: 'Note', value: () => 'x', sortable: false },
]
const open = (props: Record<string, unknown> = {}) => mountSuspended(DataTable as never, { props: { rows, columns, rowKey: (row: Row) => row.code, caption: 'Agents', ...props } as never })
type Wrapper = Awaited<ReturnType<typeof open>>
const codes = (wrapper: Wrapper) => wrapper.findAll('tbody tr').map(row => row.find('th').text())
const head = (wrapper: Wrapper, at: number) => wrapper.findAll('thead th')[at]!

describe('a table of evidence', () => {
  it('keeps the order it is given until a head is pressed, and says so to readers [ARIA 1.2: aria-sort]', async () => {
    const wrapper = await open()
    expect(codes(wrapper)).toEqual(['SK-9', 'SK-10', 'SK-2'])
    expect(wrapper.findAll('thead th').map(one => one.attributes('aria-sort'))).toEqual(['none', 'none', 'none', undefined])
  })
  it('sorts codes by their numbers, and turns round on the second press', async () => {
    const wrapper = await open()
    await head(wrapper, 0).find('button').trigger('click')
    expect(codes(wrapper)).toEqual(['SK-2', 'SK-9', 'SK-10'])
    expect(head(wrapper, 0).attributes('aria-sort')).toBe('ascending')
    await head(wrapper, 0).find('button').trigger('click')
    expect(codes(wrapper)).toEqual(['SK-10', 'SK-9', 'SK-2'])
    expect(head(wrapper, 0).attributes('aria-sort')).toBe('descending')
    expect(wrapper.emitted('sorted')?.at(-1)).toEqual([{ key: 'code', descending: true }])
  })
  it('puts what is not measured last in either direction', async () => {
    expect(codes(await open({ sort: { key: 'r1', descending: false } }))).toEqual(['SK-9', 'SK-2', 'SK-10'])
    expect(codes(await open({ sort: { key: 'r1', descending: true } }))).toEqual(['SK-2', 'SK-9', 'SK-10'])
  })
  it('writes value and ± in two cells under one head, with equal decimals', async () => {
    const wrapper = await open()
    expect(head(wrapper, 1).attributes('colspan')).toBe('2')
    const [first, second, third] = wrapper.findAll('tbody tr')
    expect(first!.findAll('td').slice(0, 2).map(cell => cell.text().replace('\u00A0', ' '))).toEqual(['5.31', '± 0.06'])
    expect(third!.findAll('td').slice(0, 2).map(cell => cell.text().replace('\u00A0', ' '))).toEqual(['15.70', '± 0.30'])
    expect(second!.findAll('td')[0]!.text()).toBe('not measured')
  })
  it('writes powers with raised digits where a column spans many decades, and hatches what cannot apply', async () => {
    const wrapper = await open()
    const cells = wrapper.findAll('tbody tr').map(row => row.findAll('td').at(-2)!)
    expect(cells[0]!.find('sup').text()).toBe('−6')
    expect(cells[1]!.classes()).toContain('barred')
    expect(cells[2]!.text()).toBe('0.002')
  })
  it('says what is being read, what failed, and what to do when there is nothing', async () => {
    const loading = await open({ rows: [], state: 'loading', loadingWords: 'Reading 24 agents…' })
    expect(loading.find('[role=status]').text()).toBe('Reading 24 agents…')
    expect(loading.find('table').attributes('aria-busy')).toBe('true')
    const failed = await open({ rows: [], state: 'failed', failureLine: 'The server did not answer; nothing was changed.' })
    expect(failed.find('[role=alert]').text()).toContain('nothing was changed')
    await failed.findAll('button').find(one => one.text() === 'Try again')!.trigger('click')
    expect(failed.emitted('retry')).toHaveLength(1)
    expect((await open({ rows: [] })).text()).toContain('Nothing here yet.')
  })
  it('ticks rows, all rows, and names each tick after its row', async () => {
    const wrapper = await open({ selectable: true, selected: [] })
    const ticks = wrapper.findAll('input[type=checkbox]')
    expect(ticks.map(tick => wrapper.find(`label[for="${tick.attributes('id')}"]`).text())).toEqual(['Choose all rows', 'Choose SK-9', 'Choose SK-10', 'Choose SK-2'])
    await ticks[0]!.setValue(true)
    expect(wrapper.emitted('update:selected')?.at(-1)).toEqual([['SK-9', 'SK-10', 'SK-2']])
  })
  it('chooses a row by pressing it, but not by pressing what stands in it', async () => {
    const wrapper = await open({ choosable: true, selectable: true, chosen: 'SK-10' })
    expect(wrapper.find('tr[aria-current=true] th').text()).toBe('SK-10')
    await wrapper.find('tbody input').trigger('click')
    expect(wrapper.emitted('choose')).toBeUndefined()
    await wrapper.findAll('tbody tr')[2]!.find('th').trigger('click')
    expect(wrapper.emitted('choose')?.[0]).toEqual([rows[2]])
  })
})
