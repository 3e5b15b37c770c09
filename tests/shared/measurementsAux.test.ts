import { describe, expect, it } from 'vitest'
import { relaxT1Ir } from '#shared/measurements/relaxT1Ir'
import { understandTable } from '#shared/measurements/tabular/understand'
import { RECOVERY_FORM } from './measurementsSupport'

const draft = { conditions: { ...RECOVERY_FORM }, complexCode: 'SK-07', lot: 'B2' }
const read = (text: string) => understandTable({ text, kind: relaxT1Ir, draft })

/** Numbers of a field, point by point, for every tube. */
function fieldOf(understood: ReturnType<typeof read>, field: string): (number | null)[][] {
  return understood.tubes.map(({ points }) => points.rows.map(row => row[points.columns.indexOf(field)] ?? null))
}

describe('numbers that go with each point are kept under their field', () => {
  it('from columns of the long form; an empty cell is not measured', () => {
    const understood = read('tube,conc (mM),TI (ms),signal,ROI SD,pixels\na,0,50,1,0.5,64\na,0,500,2,,32\nb,1,50,3,0.7,64\nb,1,500,4,0.8,\n')
    expect(fieldOf(understood, 'regionSd_au')).toEqual([[0.5, null], [0.7, 0.8]])
    expect(fieldOf(understood, 'pixels')).toEqual([[64, 32], [64, null]])
  })

  it('from a row of a table with a column per tube: one number for all points of the tube', () => {
    const understood = read('TI (ms),a,b,c\nconc (mM),0,1,2\npixels,64,32,16\n50,1,2,3\n500,2,3,4\n900,5,6,7\n')
    expect(understood.tubes.map(tube => tube.conc_mM)).toEqual([0, 1, 2])
    expect(fieldOf(understood, 'pixels')).toEqual([[64, 64, 64], [32, 32, 32], [16, 16, 16]])
  })

  it('from a column beside each tube, headed like it', () => {
    const understood = read('TI (ms),a 0 mM,a 0 mM pixels,b 1 mM,pixels b 1 mM,b 1 mM SD\n50,1,64,2,32,0.1\n500,2,65,3,33,0.2\n900,3,66,4,34,0.3\n')
    expect(understood.tubes.map(tube => tube.label)).toEqual(['a 0 mM', 'b 1 mM'])
    expect(fieldOf(understood, 'pixels')).toEqual([[64, 65, 66], [32, 33, 34]])
    expect(fieldOf(understood, 'signalSd_au')[1]).toEqual([0.1, 0.2, 0.3])
  })

  it('from a column of a table with a row per tube', () => {
    const understood = read('tube,conc (mM),pixels,50 ms,500 ms,900 ms,2000 ms\na,0,64,1,2,3,4\nb,1,32,2,3,4,5\n')
    expect(fieldOf(understood, 'pixels')).toEqual([[64, 64, 64, 64], [32, 32, 32, 32]])
  })

  it('and a cell that is no number, or outside its range, is a problem at its place', () => {
    const { problems } = read('tube,conc (mM),TI (ms),signal,pixels\na,0,50,1,many\na,0,500,2,0\n')
    expect(problems.find(problem => problem.row === 2 && problem.column === 5)).toMatchObject({ id: 'notNumber', severity: 'blocks' })
    expect(problems.find(problem => problem.row === 3 && problem.column === 5)).toMatchObject({ id: 'outOfDomain', severity: 'blocks' })
  })
})
