/**
 * What the sources may not call or write, as selectors of the linter, each with what to do instead.
 * Grouped by the place that is excepted: see .eslint.config.js.
 */

const ban = (selector, message) => ({ selector, message });

const randomNames =
  '/^(randomUUID|randomBytes|randomInt|randomFill|randomFillSync|getRandomValues)$/';
const timerNames = '/^(setTimeout|setInterval)$/';

/** Reading the machine's clock. Excepted: src/clock/clock.ts. */
export const clockBans = [
  ban(
    "MemberExpression[object.name='Date'][property.name='now']",
    'Date.now() breaks replay; take a Clock and call nowMs().',
  ),
  ban(
    ":matches(NewExpression, CallExpression)[callee.name='Date'][arguments.length=0]",
    'A date without an argument is the present; take a Clock and pass nowMs().',
  ),
  ban(
    "MemberExpression[object.name='performance'][property.name='now']",
    'performance.now() reads the machine; take a Clock and call nowMs().',
  ),
  ban(
    "MemberExpression[object.name='process'][property.name='hrtime']",
    'process.hrtime reads the machine; take a Clock and call nowMs().',
  ),
];

/** Chance without a stored seed. Excepted: src/clock/clock.ts. */
export const chanceBans = [
  ban(
    "MemberExpression[object.name='Math'][property.name='random']",
    'Math.random() cannot be replayed; pass a seeded generator of pure-rand.',
  ),
  ban(
    `MemberExpression[property.name=${randomNames}]`,
    'Random ids break replay; derive the id from what it names, or have it passed in.',
  ),
  ban(
    `ImportSpecifier[imported.name=${randomNames}]`,
    'Random ids break replay; derive the id from what it names, or have it passed in.',
  ),
];

/** Environment and timers. Excepted: src/clock/clock.ts and src/cli. */
export const shellBans = [
  ban(
    "MemberExpression[object.name='process'][property.name='env']",
    'The environment is read in cli/ alone; have the value passed in.',
  ),
  ban(
    "VariableDeclarator[init.name='process'] Property[key.name='env']",
    'The environment is read in cli/ alone; have the value passed in.',
  ),
  ban(
    "ImportDeclaration[source.value=/^(node:)?process$/] ImportSpecifier[imported.name='env']",
    'The environment is read in cli/ alone; have the value passed in.',
  ),
  ban(
    `CallExpression[callee.name=${timerNames}]`,
    'Timers are started in cli/ alone; have the waiting passed in as a port.',
  ),
  ban(
    `CallExpression[callee.object.name='globalThis'][callee.property.name=${timerNames}]`,
    'Timers are started in cli/ alone; have the waiting passed in as a port.',
  ),
  ban(
    'ImportDeclaration[source.value=/^(node:)?timers(.promises)?$/]',
    'Timers are started in cli/ alone; have the waiting passed in as a port.',
  ),
];

/** An order that depends on the machine's language. No exception. */
export const orderBans = [
  ban(
    "MemberExpression[property.name='localeCompare']",
    'localeCompare orders by the machine; compare code points with a plain <.',
  ),
];

/**
 * Effects on import. Excepted: the program itself, src/cli/main.ts. A file may fill a table of its
 * own while it loads (`table.fill(1)`), because nobody else can tell.
 */
const effectMessage =
  'Importing a file has no effect; move the call into a function that a caller runs.';
export const importEffectBans = [
  ban('Program > ExpressionStatement > CallExpression[callee.type="Identifier"]', effectMessage),
  ban(
    'Program > ExpressionStatement > CallExpression[callee.object.name=/^(process|console)$/]',
    effectMessage,
  ),
  ban('Program > ExpressionStatement > :matches(AwaitExpression, NewExpression)', effectMessage),
];
