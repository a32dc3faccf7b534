export { byStart, type Flag, type FlagKind } from './flag';
export { createFlagger, type Flagger } from './flagger';
export { defaultRules, parseRules, rulesFileSchema, rulesSchema, type Rules, type RulesFault, type RulesResult } from './rules';
export { lengthResidual, type LengthResidual } from './length-residual';
export { handStatics, type HandStatics, type HandStaticsColumns } from './hand-statics';
