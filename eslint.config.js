import boundaries from 'eslint-plugin-boundaries';
import reactHooks from 'eslint-plugin-react-hooks';
import tseslint from 'typescript-eslint';

/** Colours live in client/src/ui/tokens*; a raw one anywhere else in the client is a fault. */
const rawColour = String.raw`/(#[0-9a-fA-F]{3,4}\b|#[0-9a-fA-F]{6}\b|#[0-9a-fA-F]{8}\b|\b(rgb|rgba|hsl|hsla|hwb|lab|lch|oklab|oklch|color)\()/`;
const colourMessage = 'Colours come from ui/tokens: use a token, or add one there.';

/** A colour by name, where a drawing or a style takes one. */
const namedColour = String.raw`/^(?!none$|inherit$|transparent$|currentColor$|context-fill$|context-stroke$)[a-z]+$/i`;
const takesColour = '/^(color|background|backgroundColor|borderColor|outlineColor|fill|stroke|stopColor|fillStyle|strokeStyle|shadowColor)$/';

const layerMessage = 'routes call the service, the service calls queries; nothing calls back up.';
const sqlMessage = 'SQL lives in queries.ts (or server/db): services and routes hold none.';
const pureMessage = 'shared/ is pure: no I/O, no clock, no randomness that is not passed in.';

/** Who may import whom: the house of DEVELOPERS.md. Everything not allowed is refused. */
const house = {
  elements: [
    { type: 'client-feature', pattern: 'client/src/features/*', capture: ['feature'] },
    { type: 'client-app', pattern: 'client/src/app' },
    { type: 'client-replay', pattern: 'client/src/replay' },
    { type: 'client-ui', pattern: 'client/src/ui' },
    { type: 'client-lib', pattern: 'client/src/lib' },
    { type: 'client-public', pattern: 'client/public' },
    { type: 'server-feature', pattern: 'server/features/*', capture: ['feature'] },
    { type: 'server', pattern: 'server' },
    { type: 'shared', pattern: 'shared' },
    { type: 'tests', pattern: 'tests' },
    { type: 'samples', pattern: 'samples' },
  ],
  files: [
    { category: 'entry', pattern: 'client/src/main.tsx' },
    { category: 'public', pattern: '**/features/*/index.ts' },
    { category: 'public', pattern: '**/features/*/index.tsx' },
  ],
};

const to = (type, more = {}) => ({ to: { element: { type, ...more } } });
const toPublic = (type) => ({ to: { element: { type }, file: { categories: 'public' } } });
const toOwnFeature = (type) => ({ to: { element: { type, captured: { feature: '{{from.element.captured.feature}}' } } } });
const from = (type, allow) => ({ from: { element: { type } }, allow });

export default tseslint.config(
  { ignores: ['node_modules', 'dist', '.data', '.screens', 'drizzle', 'coverage'] },
  ...tseslint.configs.recommended,
  {
    linterOptions: { reportUnusedDisableDirectives: 'error' },
    settings: {
      'boundaries/elements': house.elements,
      'boundaries/files': house.files,
      'boundaries/include': ['client/**/*', 'server/**/*', 'shared/**/*', 'tests/**/*', 'samples/**/*'],
      'import/resolver': { typescript: { alwaysTryTypes: true, project: './tsconfig.json' } },
    },
    plugins: { boundaries },
    rules: {
      '@typescript-eslint/no-explicit-any': 'error',
      '@typescript-eslint/no-unused-vars': ['error', { argsIgnorePattern: '^_', varsIgnorePattern: '^_' }],
      '@typescript-eslint/consistent-type-imports': ['error', { fixStyle: 'inline-type-imports' }],
      'no-console': 'error',
      eqeqeq: 'error',
      // A folder that is no part of the house would be bound by none of its rules.
      'boundaries/no-unknown-files': 'error',
      'boundaries/no-unknown-dependencies': 'error',
      'boundaries/dependencies': ['error', {
        default: 'disallow',
        checkAllOrigins: true,
        policies: [
          { from: { element: { type: ['server', 'server-feature', 'tests', 'samples'] } }, allow: { to: { module: { origin: ['external', 'core'] } } } },
          { from: { element: { type: 'client-*' } }, allow: { to: { module: { origin: 'external' } } } },
          { from: { file: { categories: 'entry' } }, allow: { to: { module: { origin: 'external' } } } },
          // What is pure itself: schemas, encodings, transforms.
          from('shared', { to: { module: { origin: 'external', source: ['zod', 'msgpackr', 'fft.js', 'fflate'] } } }),
          from('shared', to('shared')),
          from('server', [to('shared'), to('server'), toPublic('server-feature')]),
          from('server-feature', [to('shared'), to('server'), toPublic('server-feature'), toOwnFeature('server-feature')]),
          from('client-lib', [to('shared'), to('client-lib')]),
          from('client-ui', [to('shared'), to('client-lib'), to('client-ui')]),
          from('client-replay', [to('shared'), to('client-lib'), to('client-ui'), to('client-replay')]),
          from('client-feature', [
            to('shared'), to('client-lib'), to('client-ui'), to('client-replay'), toPublic('client-feature'), toOwnFeature('client-feature'),
          ]),
          from('client-app', [to('shared'), to('client-lib'), to('client-ui'), to('client-replay'), to('client-app'), toPublic('client-feature')]),
          { from: { file: { categories: 'entry' } }, allow: [to('client-app'), to('client-ui'), to('client-lib')] },
          from('samples', [to('samples')]),
          from('tests', [
            to('shared'), to('server'), to('server-feature'), to('samples'), to('tests'),
            ...['client-lib', 'client-ui', 'client-replay', 'client-feature', 'client-app'].map((type) => to(type)),
          ]),
        ],
      }],
    },
  },
  {
    files: ['client/**/*.{ts,tsx}'],
    plugins: { 'react-hooks': reactHooks },
    rules: {
      'react-hooks/rules-of-hooks': 'error',
      'react-hooks/exhaustive-deps': 'error',
    },
  },
  {
    files: ['client/src/**/*.{ts,tsx}'],
    ignores: ['client/src/ui/tokens*'],
    rules: {
      'no-restricted-syntax': ['error',
        { selector: `Literal[value=${rawColour}]`, message: colourMessage },
        { selector: `TemplateElement[value.raw=${rawColour}]`, message: colourMessage },
        { selector: 'Literal[raw=/^0x[0-9a-fA-F]{6}$/]', message: colourMessage },
        { selector: `Property[key.name=${takesColour}] > Literal[value=${namedColour}]`, message: colourMessage },
        { selector: `JSXAttribute[name.name=${takesColour}] > Literal[value=${namedColour}]`, message: colourMessage },
        { selector: `AssignmentExpression[left.property.name=${takesColour}] > Literal[value=${namedColour}]`, message: colourMessage },
      ],
    },
  },
  {
    files: ['server/**/*.ts'],
    ignores: ['server/db/**', 'server/**/queries.ts', 'server/**/*-queries.ts', 'server/**/queries/**', 'server/**/*.test.ts'],
    rules: {
      '@typescript-eslint/no-restricted-imports': ['error', {
        patterns: [{ group: ['drizzle-orm', 'drizzle-orm/*', 'pg', '@electric-sql/*'], message: sqlMessage }, { group: ['**/db/schema', '**/db/schema/*'], message: sqlMessage }],
      }],
      'no-restricted-syntax': ['error', {
        selector: 'CallExpression[callee.object.name=/^(db|tx)$/][callee.property.name=/^(select|selectDistinct|selectDistinctOn|insert|update|delete|execute|with|refreshMaterializedView)$/], MemberExpression[object.name=/^(db|tx)$/][property.name="query"]',
        message: sqlMessage,
      }],
    },
  },
  {
    files: ['server/features/*/routes.ts'],
    rules: { '@typescript-eslint/no-restricted-imports': ['error', { patterns: [{ group: ['drizzle-orm', 'drizzle-orm/*', 'pg', '**/db/*'], message: sqlMessage }, { group: ['./*queries'], message: layerMessage }] }] },
  },
  {
    files: ['server/features/*/*queries.ts'],
    rules: { '@typescript-eslint/no-restricted-imports': ['error', { patterns: [{ group: ['./routes', './service', './*-service', './errors', '../../http'], message: layerMessage }] }] },
  },
  {
    files: ['shared/**/*.ts'],
    ignores: ['shared/**/*.test.ts'],
    rules: {
      'no-restricted-globals': ['error', ...['window', 'document', 'localStorage', 'fetch', 'process', 'Buffer', 'performance', 'setTimeout', 'setInterval', 'setImmediate', 'queueMicrotask', 'crypto', 'globalThis', 'self', 'global'].map((name) => ({ name, message: pureMessage }))],
      'no-restricted-properties': ['error', { object: 'Math', property: 'random', message: pureMessage }, { object: 'Date', property: 'now', message: pureMessage }],
      'no-restricted-syntax': ['error', { selector: "NewExpression[callee.name='Date'][arguments.length=0], CallExpression[callee.name='Date']", message: pureMessage }],
    },
  },
  {
    files: ['server/cli/**', 'tests/run.ts', 'tests/bench/**', 'samples/**'],
    rules: { 'no-console': 'off' },
  },
);
