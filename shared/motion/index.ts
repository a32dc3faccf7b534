/**
 * Measures of movement: filters, spectra, smoothness, grasp, energy, load cycles, and all of them over a whole recording.
 * Everything is SI, pure and synchronous.
 */
export { bandPower, TREMOR_BAND_HZ } from './band-power';
export { butterworthLowPass, type FilterSection, type LowPass } from './butterworth-low-pass';
export { derivative } from './derivative';
export { filterZeroPhase } from './filter-zero-phase';
export { graspFollower, graspPhases, graspRule, type GraspCounts, type GraspFollower, type GraspRule } from './grasp-phases';
export { logDimensionlessJerk } from './log-dimensionless-jerk';
export { createMeasures, type MeasureAccumulator, type MeasureChunk, type MeasureOptions, type RecordingMeasures } from './measures';
export { MOVEMENT_UNIT_RULE, movementUnitCounter, movementUnits, type MovementUnitCounter, type MovementUnitRule } from './movement-units';
export { passivity, passivityObserver, type PassivityObserver, type PassivityResult } from './passivity-observer';
export { pathLength, pathRatio, peakSegmentSpeed, straightLine, type PathPoints } from './path-length';
export { PAUSE_RULE, pauses, pauseTimer, type PauseRule, type PauseTimer, type Stretch } from './pauses';
export { rainflow, rainflowCounter, type LoadCycles, type RainflowCounter } from './rainflow';
export { type CableMeasures } from './recording-measures/tension-times';
export { sparc } from './sparc';
export { meanSpeed, peakSpeed, speedProfile } from './speed-profile';
export { spectrumSum, welchSpectrum, type Spectrum, type SpectrumSum } from './welch-spectrum';
export { portEnergy, work, type PortEnergy, type PortSample } from './work';
