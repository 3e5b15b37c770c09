import { mountSuspended } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import AgentMark from '~/components/state/AgentMark.vue'
import FigurePlot from '~/components/figure/FigurePlot.vue'
import SmallMultiple from '~/components/figure/SmallMultiple.vue'
import StateGlyph from '~/components/state/StateGlyph.vue'
import TimeText from '~/components/table/TimeText.vue'
import { FigureSpec, SmallFigureSpec } from '#shared/schemas/figure'

describe('marks and states', () => {
  it('says shape, mechanism and signature in words, since colour never speaks alone [WCAG 2.2, 1.4.1]', async () => {
    const signed = await mountSuspended(AgentMark, { props: { topology: 'ring', mechanism: 'T1', signed: true } })
    expect(signed.find('svg').attributes('aria-label')).toBe('T1, ring ligand, signed')
    expect(signed.findAll('circle')).toHaveLength(2)
    const open = await mountSuspended(AgentMark, { props: { topology: 'openChain', mechanism: 'CEST', signed: false } })
    expect(open.find('svg').attributes('aria-label')).toBe('CEST, open chain, not signed')
    expect(open.findAll('circle')).toHaveLength(0)
    expect(open.find('.mechanism-word').text()).toBe('CEST')
  })
  it('lights the lamp for signed states and for no other', async () => {
    const lit = []
    for (const state of ['draft', 'fitting', 'queued', 'waiting', 'returned', 'signed', 'recalled', 'withdrawn', 'refused', 'failed', 'missing', 'literature'] as const) {
      const wrapper = await mountSuspended(StateGlyph, { props: { state } })
      expect(wrapper.text().length).toBeGreaterThan(3)
      if (wrapper.html().includes('--lamp')) lit.push(state)
    }
    expect(lit).toEqual(['signed'])
  })
  it('names a state for readers where the word is not shown', async () => {
    const wrapper = await mountSuspended(StateGlyph, { props: { state: 'fitting', detail: 'tube 7 of 10', withWord: false } })
    expect(wrapper.find('svg').attributes('aria-label')).toBe('fitting, tube 7 of 10')
  })
  it('writes a moment by the given clock, and words for none', async () => {
    const now = Date.parse('2026-12-01T09:00:00Z')
    expect((await mountSuspended(TimeText, { props: { at: '2026-11-30T16:40:00Z', now } })).text()).toBe('yesterday, 16:40')
    expect((await mountSuspended(TimeText, { props: { at: null, now } })).text()).toBe('not given')
  })
})

describe('figures', () => {
  const figure = FigureSpec.parse({
    id: 'f', title: 'Slope of SK-07', text: 'R_1 rises from 0.3 to 13 s^-1.', x: { label: 'concentration', unit: 'mM', scale: 'linear' }, y: { label: 'R_1', unit: 's^-1', scale: 'linear', domain: [0, 10] },
    layers: [
      { type: 'points', name: 'tubes', token: 't1', points: [{ x: 0, y: 0.3, id: 'a' }, { x: 1, y: 4.5, id: 'b' }, { x: 3, y: 13, id: 'c' }] },
      { type: 'cross', name: 'left out', points: [{ x: 2, y: 7.7, label: '2.00 mM' }] },
    ],
    strip: { label: 'residual, in SE', points: [{ x: 0, y: 1 }, { x: 1, y: 4.1 }, { x: 2, y: 2, out: true }] },
  })
  it('draws points, keeps left-out ones as crosses and shows the off-scale one as an arrow with its value', async () => {
    const wrapper = await mountSuspended(FigurePlot, { props: { figure } })
    expect(wrapper.findAll('svg[role=img] circle')).toHaveLength(2)
    expect(wrapper.text()).toContain('13, off the scale')
    expect(wrapper.findAll('title').map(one => one.text())).toContain('2.00 mM: concentration 2 mM, R1 7.7 s^−1, left out')
  })
  it('has a text for readers and turns into its table', async () => {
    const wrapper = await mountSuspended(FigurePlot, { props: { figure } })
    const plot = wrapper.find('svg[role=img]')
    expect(wrapper.find(`[id="${plot.attributes('aria-describedby')}"]`).text()).toBe('R1 rises from 0.3 to 13 s^−1.')
    await wrapper.find('button.link').trigger('click')
    expect(wrapper.findAll('tbody tr')).toHaveLength(4)
    expect(wrapper.find('svg[role=img]').exists()).toBe(false)
  })
  it('tells which point was pressed', async () => {
    const wrapper = await mountSuspended(FigurePlot, { props: { figure } })
    await wrapper.find('svg[role=img] circle').trigger('click')
    expect(wrapper.emitted('pick')).toEqual([['a']])
  })
  it('shows a tube without a fit as such, and what is left out struck through', async () => {
    const tube = SmallFigureSpec.parse({
      id: 't5', title: '0.50 mM', value: null, plusMinus: null, text: 'Tube 5, no fit.', x: { scale: 'log' }, y: { scale: 'linear' },
      points: [{ x: 50, y: -90 }, { x: 100, y: 10, out: true }], curve: [], residuals: [{ x: 50, y: 5 }], flags: ['outlier'], leftOut: true,
    })
    const wrapper = await mountSuspended(SmallMultiple, { props: { figure: tube, width: 146, chosen: true } })
    expect(wrapper.text()).toContain('no fit')
    expect(wrapper.find('b').classes()).toContain('line-through')
    expect(wrapper.attributes('aria-pressed')).toBe('true')
    expect(wrapper.find('path.dots').attributes('d')!.split('M')).toHaveLength(2)
    await wrapper.trigger('click')
    expect(wrapper.emitted('choose')).toEqual([['t5']])
  })
})
