/** Who may import whom: the table of rooms. Data first, rules made from it below. */
const rooms = {
  terms: [],
  stats: ['terms'],
  config: ['terms'],
  clock: ['terms'],
  draw: ['terms'],
  store: ['terms', 'clock'],
  decode: ['terms', 'config', 'clock'],
  collect: ['terms', 'decode', 'store', 'clock', 'config'],
  judge: ['terms', 'stats', 'clock', 'config'],
  alert: ['terms', 'stats', 'clock', 'config'],
  schedule: ['judge', 'alert', 'store', 'clock', 'config', 'terms'],
  send: ['alert', 'draw', 'store', 'clock', 'config', 'terms'],
  serve: ['schedule', 'judge', 'alert', 'collect', 'draw', 'store', 'clock', 'config', 'terms'],
  // Of serve it may have the types: a rule of its own below.
  console: ['terms', 'draw', 'serve'],
};
const everyRoom = [...Object.keys(rooms), 'cli'];
const pureRooms = 'terms|stats|draw|judge|alert';

const error = (name, comment, from, to) => ({ name, comment, severity: 'error', from, to });

const roomRules = Object.entries(rooms).map(([room, allowed]) =>
  error(
    `room-${room}`,
    `${room}/ may import ${allowed.join(', ') || 'nothing'}; pass the rest in`,
    { path: `^src/${room}/` },
    { path: '^src/', pathNot: `^src/(${[room, ...allowed].join('|')})/` },
  ),
);

export default {
  forbidden: [
    ...roomRules,
    error(
      'unknown-room',
      'every folder of src/ is a room; give it a row in .dependency-cruiser.mjs',
      { path: '^src/', pathNot: `^src/(${everyRoom.join('|')})/` },
      {},
    ),
    error(
      'console-takes-types-only',
      'console/ may use the types of serve/, never its code',
      { path: '^src/console/' },
      { path: '^src/serve/', dependencyTypesNot: ['type-only'] },
    ),
    error(
      'pure-rooms-touch-no-machine',
      'files, sockets and threads stay at the edges; only hashing is a value of its input',
      { path: `^src/(${pureRooms})/` },
      { dependencyTypes: ['core'], pathNot: '^(node:)?crypto$' },
    ),
    error(
      'terms-need-no-package',
      'terms/ has types only',
      { path: '^src/terms/' },
      { dependencyTypes: ['npm', 'npm-dev', 'npm-optional', 'npm-peer', 'core'] },
    ),
    error(
      'maths-only-in-stats',
      'stats/ may use jstat and pure-rand, and no other package',
      { path: '^src/stats/' },
      { dependencyTypes: ['npm'], pathNot: '^node_modules/(jstat|pure-rand)/' },
    ),
    error(
      'src-stays-in-src',
      'the program may not import tests, tools or its own build',
      { path: '^src/' },
      { path: '^(test|dist|\\.ci|deploy|migrations|config)/' },
    ),
    error(
      'no-development-packages',
      'what the program imports belongs in dependencies',
      { path: '^src/' },
      { dependencyTypes: ['npm-dev', 'npm-no-pkg', 'npm-unknown'] },
    ),
    error(
      'no-cycle',
      'two files that need each other are one, or want a third',
      {},
      {
        circular: true,
      },
    ),
    error(
      'no-orphan',
      'nothing imports this file and it imports nothing; use it or remove it',
      { orphan: true, pathNot: '^test/|\\.d\\.ts$' },
      {},
    ),
    error('resolves', 'the import leads nowhere', {}, { couldNotResolve: true }),
  ],
  options: {
    doNotFollow: { path: 'node_modules' },
    tsConfig: { fileName: 'tsconfig.json' },
    // Types count: a cycle of types is a cycle.
    tsPreCompilationDeps: true,
    enhancedResolveOptions: {
      exportsFields: ['exports'],
      conditionNames: ['import', 'node', 'default', 'types'],
    },
  },
};
