export const calibrationCalls = {};
