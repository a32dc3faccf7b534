/**
 * The rig: model, kinematics, statics, workspace, rotations, calibration. Everything is SI, pure and synchronous.
 * Cables are numbered from 1 wherever a number leaves this folder, from 0 in arrays.
 */
export { NumericError, type NumericErrorCode } from './numeric-error';
export { poseFromArray, poseToArray, requirePose, type Pose, type Quat, type Vec3 } from './pose';
export { rigFileSchema, type RigFile } from './rig-file';
export { checkRig, isFaultOfHome, type RigFault, type RigFaultCode } from './check-rig';
export { rigModel, type RigModel } from './rig-model';
export { parseRig } from './parse-rig';

export { attachmentPoints } from './kinematics/attachment-points';
export { cableLengths } from './kinematics/cable-lengths';
export { structureMatrix } from './kinematics/structure-matrix';
export { structureMatrixGraspDerivative } from './kinematics/structure-matrix-grasp-derivative';
export { lengthRates } from './kinematics/length-rates';
export { twistFromLengthRates } from './kinematics/twist-from-length-rates';

export { rankOf } from './statics/rank-of';
export { nullVector } from './statics/null-vector';
export { closure, closureOf, type Closure } from './statics/closure';
export { distributeTensions, type ActiveLimit, type TensionAnswer, type TensionLimits } from './statics/distribute-tensions';
export { capacityMargin, type CapacityMargin } from './statics/capacity-margin';
export { wrenchFromTensions } from './statics/wrench-from-tensions';
export { wrenchSize, wrenchWeights, MOMENT_ARM_M } from './statics/wrench-size';
export { cableStretch } from './statics/cable-stretch';

export { createForwardSolver, type ForwardSolver, type ForwardStatus } from './forward/create-forward-solver';
export { forwardKinematics, type ForwardAnswer } from './forward/forward-kinematics';

export { canonical } from './rotation/canonical';
export { conjugate, multiply, normalised, rotate } from './rotation/quaternion';
export { matrixFromQuat, type Matrix3 } from './rotation/rotation-matrix';
export { quatFromMatrix } from './rotation/quat-from-matrix';
export { quatFromRotvec, rotvecFromQuat } from './rotation/rotvec';
export { eulerZyxFromQuat, quatFromEulerZyx } from './rotation/euler-zyx';
export { slerp } from './rotation/slerp';
export { meanRotation } from './rotation/mean-rotation';
export { geodesicAngle } from './rotation/geodesic-angle';

export { registerPoints, type PointRegistration } from './calibration/register-points';
export { registerOrientations, type OrientationRegistration } from './calibration/register-orientations';
export { timeOffset, type TimeOffset } from './calibration/time-offset';
export {
  DEFAULT_TRACKING_TOLERANCES,
  trackingError,
  withinTolerances,
  type ErrorSummary,
  type TrackedPoses,
  type TrackingError,
  type TrackingTolerances,
} from './calibration/tracking-error';
export {
  orientationRepeatability,
  positionRepeatability,
  type OrientationRepeatability,
  type PositionRepeatability,
} from './calibration/pose-repeatability';

export { graspsWithin, orientationsWithin } from './workspace/orientation-set';
export { positionOf, workspace, type Workspace, type WorkspaceOptions, type WorkspaceProgress } from './workspace/workspace';
