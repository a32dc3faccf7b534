/** The served description of the API, as a program reads it that knows nothing else of Tautbook. */
import { Ajv2020, type ValidateFunction } from 'ajv/dist/2020';
import addFormats from 'ajv-formats';

interface Media { schema?: object }

export interface Operation {
  operationId: string;
  security?: unknown[];
  parameters?: { name: string; in: string; required?: boolean }[];
  requestBody?: { content: Record<string, Media> };
  responses: Record<string, { $ref?: string; description?: string; content?: Record<string, Media> }>;
}

export interface Description {
  openapi: string;
  paths: Record<string, Record<string, Operation>>;
  components: { schemas: Record<string, object>; responses: Record<string, { content: Record<string, Media> }> };
}

export interface Described {
  method: string;
  path: string;
  operation: Operation;
  /** What is wrong with an answer, by the description alone. */
  check(response: Response): Promise<string[]>;
}

const known = new WeakMap<Description, Map<string, Described>>();

export function operationsOf(description: Description): Map<string, Described> {
  const earlier = known.get(description);
  if (earlier) return earlier;
  // JSON Schema 2020-12 is the dialect of OpenAPI 3.1. Unknown words are the description's own, so it is not strict.
  const ajv = new Ajv2020({ strict: false, allErrors: true });
  addFormats.default(ajv);
  ajv.addSchema({ $id: 'https://description.example/', ...description });
  const operations = new Map<string, Described>();
  for (const [path, methods] of Object.entries(description.paths)) {
    for (const [method, operation] of Object.entries(methods)) {
      operations.set(operation.operationId, { method: method.toUpperCase(), path, operation, check: checkOf(ajv, description, operation) });
    }
  }
  known.set(description, operations);
  return operations;
}

function checkOf(ajv: Ajv2020, description: Description, operation: Operation): Described['check'] {
  const compiled = new Map<string, ValidateFunction>();
  return async (response) => {
    const answer = operation.responses[String(response.status)] ?? operation.responses['default'];
    if (answer === undefined) return [`status ${response.status} is not described`];
    const content = (answer.$ref ? description.components.responses[answer.$ref.split('/').at(-1)!] : answer)?.content ?? {};
    const type = (response.headers.get('content-type') ?? '').split(';')[0] ?? '';
    const media = content[type];
    if (media === undefined) return [`${type} is not described, but ${Object.keys(content).join(', ')}`];
    if (!/[/+]json$/.test(type)) return [];
    let validate = compiled.get(type);
    if (validate === undefined) {
      validate = ajv.compile(rooted(media.schema ?? {}));
      compiled.set(type, validate);
    }
    validate(await response.json());
    return (validate.errors ?? []).map(({ instancePath, message }) => `${instancePath} ${message}`);
  };
}

/** References inside a description begin at its root. */
const rooted = (schema: object): object => JSON.parse(JSON.stringify(schema).replaceAll('"$ref":"#/', '"$ref":"https://description.example/#/')) as object;
