import type { Flag, FlagFinding } from './flags'
import type { RelaxivityDone } from './relaxivity'
import { tQuantile } from '../statistics'

const digits = (value: number) => Number(value.toPrecision(3)).toString()

/** A probability in words: "p = 0.032", or "p below 0.001", where more digits say nothing. */
export const pWords = (p: number): string => p < 0.001 ? 'p below 0.001' : `p = ${Number(p.toPrecision(2))}`

function whenKnown(p: number | null, limit: number, say: (p: string) => string): FlagFinding {
  return p === null ? null : { isRaised: p < limit, detail: say(pWords(p)) }
}

/** A tube at the end of a line always has weight; it pulls only where it is also an outlier (Bonferroni t). */
function testInfluence({ points, dof, relaxivity_per_mM_s: { value } }: RelaxivityDone): FlagFinding {
  const judged = points.flatMap(({ cook, studentised, slopeWithout_per_mM_s: without }, i) =>
    cook === null || studentised === null || without === null ? [] : [{ tube: i + 1, cook, size: Math.abs(studentised), shift: without / value - 1 }])
  const limit = outlierLimit(judged.length, dof)
  if (limit === null) return null
  const pulling = judged.filter(tube => tube.cook > 1 && tube.size > limit)
  const largest = (pulling.length > 0 ? pulling : judged).reduce((a, b) => b.cook > a.cook ? b : a)
  return {
    isRaised: pulling.length > 0,
    tube: largest.tube,
    detail: `Largest Cook's distance ${digits(largest.cook)} (tube ${largest.tube}, studentised residual ${digits(largest.size)}); without it the slope moves by ${digits(100 * largest.shift)} %.`,
  }
}

/** Bonferroni t for the largest of n externally studentised residuals at 5 %; null where the line leaves no freedom to judge one tube. */
function outlierLimit(n: number, dof: number): number | null {
  return n === 0 || dof < 2 ? null : tQuantile(1 - 0.05 / (2 * n), dof - 1)
}

/** A tube that lies off the line of the others, wherever on the line it stands: in the middle it hardly turns the slope and still is not what its label says. */
function testOutlier({ points, dof }: RelaxivityDone): FlagFinding {
  const judged = points.flatMap(({ studentised }, i) => studentised === null ? [] : [{ tube: i + 1, size: Math.abs(studentised) }])
  const limit = outlierLimit(judged.length, dof)
  if (limit === null) return null
  const largest = judged.reduce((a, b) => b.size > a.size ? b : a)
  return { isRaised: largest.size > limit, tube: largest.tube, detail: `Largest studentised residual ${digits(largest.size)} (tube ${largest.tube}); limit ${digits(limit)}.` }
}

/** Flags of one relaxivity line. */
export const SERIES_FLAGS: readonly Flag<RelaxivityDone>[] = [
  {
    id: 'unweighted', title: 'Line without weights', advice: 'Give a standard error for every relaxation time: an unweighted line understates its error.',
    test: ({ method }) => ({ isRaised: method === 'unweighted', detail: method === 'unweighted' ? 'An error of a relaxation time is missing, so all tubes count alike.' : 'Every rate has its own weight.' }),
  },
  {
    id: 'fewConcentrations', title: 'Fewer than four concentrations', advice: 'Measure more concentrations.',
    test: ({ points }) => {
      const count = new Set(points.map(point => point.conc_mM)).size
      return { isRaised: count < 4, detail: `${count} different concentrations.` }
    },
  },
  {
    id: 'noBlank', title: 'No blank', advice: 'Measure the medium without agent: the intercept is an extrapolation.',
    test: ({ points }) => {
      const hasBlank = points.some(point => point.conc_mM === 0)
      return { isRaised: !hasBlank, detail: hasBlank ? 'A tube without agent is part of the line.' : 'No tube has concentration 0.' }
    },
  },
  {
    id: 'scatter', title: 'Scatter larger than the errors', advice: 'Look for a wrong concentration or a faulty tube; the error of the slope has been scaled up.',
    test: ({ chi2P, reducedChi2 }) => whenKnown(chi2P, 0.01, p => `Reduced χ² is ${digits(reducedChi2!)}, ${p}.`),
  },
  {
    id: 'bent', title: 'Line is bent', advice: 'Leave out the highest concentration, or look for binding or aggregation.',
    test: ({ quadraticP }) => whenKnown(quadraticP, 0.05, p => `Quadratic term: ${p}.`),
  },
  {
    id: 'lackOfFit', title: 'Line misses repeated concentrations', advice: 'Tubes of one concentration agree better with each other than with the line: look for binding, aggregation or a wrong dilution.',
    test: ({ lackOfFit }) => lackOfFit && whenKnown(lackOfFit.p, 0.05, p => `Lack of fit: F(${lackOfFit.dof1}, ${lackOfFit.dof2}) = ${digits(lackOfFit.f)}, ${p}.`),
  },
  {
    id: 'outlyingTube', title: 'One tube lies off the line', advice: 'Look at how that tube was made; leave it out with its reason where there is one.', test: testOutlier,
  },
  {
    id: 'influence', title: 'One tube pulls the line', advice: 'Check that tube; compare the slope without it.', test: testInfluence,
  },
  {
    id: 'blankDisagrees', title: 'Intercept and blank disagree', advice: 'Check the medium of the blank and the lowest concentrations.',
    test: ({ blank }) => blank && whenKnown(blank.p, 0.05, p => `Intercept without the blank ${digits(blank.intercept_per_s)} per s, blank ${digits(blank.blank_per_s)} per s, ${p}.`),
  },
  {
    id: 'smallSpan', title: 'Rates span less than a factor of two', advice: 'Use higher concentrations.',
    test: ({ span }) => span === null
      ? { isRaised: true, detail: 'The diamagnetic rate does not come out above 0.' }
      : { isRaised: span < 2, detail: `The largest rate is ${digits(span)} times the diamagnetic one.` },
  },
]
