/** The HTTP layer: how a route is served, how it refuses, what stands before it. */
export { Refusal, defineRefusals } from './refusal';
export { refuse as refuseRequest } from './errors';
export { serve, type ApiRouter, type AuditLine, type AuditNote, type Call, type Handler } from './serve';
export { describeFault, problemHandler, problemOf, sendProblem, unknownRoute } from './problem';
export { isSameOrigin, jsonBody, raiseShield, rates, sameOriginChanges, type RateOptions } from './shield';
export { describeApi } from './openapi';
export { serveClient } from './client-files';
