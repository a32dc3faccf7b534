export { byStart, severities, type Flag, type FlagKind, type Severity } from './flag';
export { causeKinds, type Cause, type CauseKind, type Help, type NullLine } from './cause/cause';
export { createFlagger, type Flagger } from './flagger';
export { defaultRules, parseRules, rulesFileSchema, rulesSchema, type Rules, type RulesFault, type RulesResult } from './rules';
export { lengthResidual, type LengthResidual } from './length-residual';
export { handStatics, type HandStatics, type HandStaticsColumns } from './hand-statics';
