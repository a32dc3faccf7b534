/** Questionnaires and tasks of a study, scored as the instrument says. */
export { BODY_REGIONS, discomfort, discomfortChange, type BodyRegion, type Discomfort, type DiscomfortChange, type DiscomfortRatings } from './discomfort';
export { pointingThroughput, type PointingThroughput, type PointingTrials } from './pointing-throughput';
export { USABILITY_ITEMS, usabilityScale, type UsabilityScore } from './usability-scale';
export {
  rawWorkload,
  WORKLOAD_PAIRS,
  WORKLOAD_SUBSCALES,
  weightedWorkload,
  workloadWeights,
  type WorkloadPair,
  type WorkloadRatings,
  type WorkloadSubscale,
  type WorkloadWeights,
} from './workload';
