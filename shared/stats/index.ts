/** Statistics of a study: paired comparisons, agreement, intervals, balanced orders. Pure and synchronous; randomness is seeded. */
export { blandAltman, type BlandAltman } from './bland-altman';
export { bootstrapInterval, type BootstrapInterval, type BootstrapOptions } from './bootstrap-interval';
export { cohenDav, cohenDz, type StandardisedDifference } from './cohen-dz';
export { agreementTable, cohenKappa, type Kappa, type KappaWeights } from './cohen-kappa';
export { hedgesG } from './hedges-g';
export { holm } from './holm';
export { intraclassCorrelation, type IntraclassCorrelation } from './intraclass-correlation';
export { linearTrend, type LinearTrend } from './linear-trend';
export { meanAndDeviation, type MeanAndDeviation } from './mean-and-deviation';
export { pairedTTest, type PairedTTest } from './paired-t-test';
export { quantile } from './quantile';
export { seededRandom, type SeededRandom } from './seeded-random';
export { EXACT_UP_TO, wilcoxonSignedRank, type WilcoxonOptions, type WilcoxonSignedRank } from './wilcoxon-signed-rank';
export { williamsSquare } from './williams-square';
