/**
 * The house's layers and who may import whom; default deny. Read with DEVELOPERS.md, "Who may import whom".
 * The first pattern that fits a file names its layer.
 */
const file = (category, pattern) => ({ category, pattern });

export const layers = [
  file('tests', 'tests/**/*'),
  file('shared', 'shared/**/*'),
  file('db', 'db/**/*'),
  file('engine', 'workers/engine/**/*'),
  file('workers', 'workers/**/*'),
  file('local', 'server/local/**/*'),
  file('routes', 'server/routes/**/*'),
  file('services', 'server/services/**/*'),
  file('middleware', 'server/middleware/**/*'),
  file('mail', 'server/mail/**/*'),
  file('payments', 'server/payments/**/*'),
  file('queue', 'server/queue.ts'),
  file('config', 'server/config.ts'),
  file('composition', 'server/{start,app,api,print-routes}.ts'),
  file('server-own', 'server/*.ts'),
  file('client-main', 'src/main.ts'),
  file('client-main', 'src/App.vue'),
  file('client-router', 'src/router/**/*'),
  file('client-api', 'src/api/**/*'),
  file('client-stores', 'src/stores/**/*'),
  file('client-composables', 'src/composables/**/*'),
  file('client-base', 'src/components/base/**/*'),
  file('client-components', 'src/components/**/*'),
  file('client-views', 'src/views/**/*'),
  file('client-assets', 'src/assets/**/*'),
  file('settings', '*.{ts,js,mjs}'),
];

const allLayers = [...new Set(layers.map(({ category }) => category))];

/** Everything else is refused in the words of `why`, which says where the code belongs instead; the last policy holds. */
const may = (from, to, why) => [
  {
    from: { file: { categories: from } },
    disallow: { to: { file: { categories: { anyOf: allLayers } } } },
    message: why,
  },
  { from: { file: { categories: from } }, allow: { to: { file: { categories: { anyOf: to } } } } },
];

const serverOwn = ['server-own', 'config', 'queue'];

export const policies = [
  // Packages are not layers; what each layer may take from npm is said by no-restricted-imports where it matters.
  {
    from: { element: { type: '*' } },
    allow: { to: { module: { origin: ['external', 'core'] } } },
  },
  ...may(
    'shared',
    ['shared'],
    'Shared is the contract that pages, server and worker all read: it imports nothing of ours but shared. Hand in what it needs as an argument.',
  ),
  ...may(
    'db',
    ['db', 'shared'],
    'The database layer knows tables, not why they change: it imports db and shared only. Decide in a service and call a repository from there; settings come as arguments.',
  ),
  ...may(
    'engine',
    ['engine', 'shared'],
    'The engine is pure: it imports itself and shared. What it needs of the world (bytes, rule set, time, seed) is handed in by workers/compute-study.ts or workers/study.ts.',
  ),
  ...may(
    'services',
    ['services', 'mail', 'payments', 'db', 'shared', 'local', ...serverOwn],
    "A service does one thing a person does: it imports services, repositories (db), mail, queue, config and shared. It knows no HTTP (that is the route's) and computes no study (ask for a run; the worker calls the engine).",
  ),
  ...may(
    'mail',
    ['mail', 'config', 'shared'],
    'Mail turns a payload into a letter: it imports mail, config and shared. Look things up in the service that queues the mail and put them into the payload.',
  ),
  ...may(
    'payments',
    ['payments', 'config', 'shared'],
    'An adapter for an outside service imports itself, config and shared; the service that uses it decides.',
  ),
  ...may(
    'queue',
    ['queue', 'server-own', 'config', 'shared'],
    'The queue carries run ids between server and worker and knows nothing of what they mean: config and shared only.',
  ),
  ...may(
    'config',
    ['config', 'shared'],
    'The configuration is read before anything else exists: it imports shared only.',
  ),
  ...may(
    'local',
    ['local', 'config', 'shared'],
    "server/local starts programs on one machine and is not part of the product's own layers: config and shared only.",
  ),
  ...may(
    'middleware',
    ['middleware', 'services', 'shared', ...serverOwn],
    "Middleware reads requests and asks services: it imports services, the server's own files and shared. SQL belongs into a repository, called from a service.",
  ),
  ...may(
    'routes',
    ['routes', 'services', 'middleware', 'shared', ...serverOwn],
    "A route is thin: it checks the body with a shared schema and calls a service. It imports services, middleware, the server's own files and shared; SQL belongs into db/repositories, called from a service.",
  ),
  ...may(
    'server-own',
    ['server-own', 'config', 'queue', 'services', 'db', 'shared', 'mail'],
    "The server's own files (errors, log, access) stand below the routes: they import services, db, mail and shared.",
  ),
  ...may(
    'composition',
    [
      'composition',
      'routes',
      'services',
      'middleware',
      'mail',
      'payments',
      'local',
      'db',
      'shared',
      ...serverOwn,
    ],
    "start.ts and app.ts put the server together; they import the server's layers, db and shared, but never the workers, which are other processes.",
  ),
  ...may(
    'workers',
    ['workers', 'engine', 'services', 'mail', 'payments', 'db', 'shared', ...serverOwn],
    'The worker imports the engine, services, mail, queue, config, db and shared, never the pages or routes. What both server and worker need belongs into a service.',
  ),
  ...may(
    'client-api',
    ['client-api', 'shared'],
    'src/api speaks to the server over HTTP: it imports api and shared. What server and pages both need (schemas, words, rules) belongs into shared.',
  ),
  ...may(
    'client-stores',
    ['client-stores', 'client-api', 'shared'],
    'A store keeps what outlives a page: it imports api and shared. What the server knows is fetched in a composable.',
  ),
  ...may(
    'client-composables',
    ['client-composables', 'client-stores', 'client-api', 'shared'],
    'A composable imports composables, stores, api and shared; what draws something is a component.',
  ),
  ...may(
    'client-base',
    ['client-base', 'shared'],
    'Base components know none of our nouns: they import base and shared. A component that knows an application lives in src/components/<noun>.',
  ),
  ...may(
    'client-components',
    ['client-components', 'client-base', 'client-composables', 'client-stores', 'shared'],
    'A component is given what it shows: it imports components, base, composables, stores and shared. Fetching belongs into a composable or the view (src/api is theirs).',
  ),
  ...may(
    'client-views',
    [
      'client-views',
      'client-components',
      'client-base',
      'client-composables',
      'client-stores',
      'client-api',
      'client-router',
      'client-assets',
      'shared',
    ],
    'A view imports everything of src but main, and shared. The server, the database and the workers are reached through src/api only.',
  ),
  ...may(
    'client-router',
    ['client-router', 'client-views', 'client-stores', 'client-api', 'client-composables', 'shared'],
    'The router names pages and guards: it imports views, stores, api, composables and shared.',
  ),
  ...may(
    'client-main',
    [
      'client-main',
      'client-router',
      'client-views',
      'client-components',
      'client-base',
      'client-composables',
      'client-stores',
      'client-api',
      'client-assets',
      'shared',
    ],
    'main.ts and App.vue put the pages together, from src and shared only.',
  ),
  ...may(
    'tests',
    [
      'tests',
      'shared',
      'db',
      'engine',
      'workers',
      'local',
      'services',
      'routes',
      'middleware',
      'mail',
      'payments',
      'composition',
      'client-router',
      'client-api',
      'client-stores',
      'client-composables',
      'client-base',
      'client-components',
      'client-views',
      'client-assets',
      ...serverOwn,
    ],
    'Tests may import every layer but settings files.',
  ),
  ...may('settings', ['settings'], 'A settings file at the top imports other settings files only.'),
];
