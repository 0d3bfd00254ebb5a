/**
 * Installs the locked dependencies when they are missing or older than the lock file.
 * Needs Node alone, because it runs before anything is installed.
 */
import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync, realpathSync, statSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
// npm writes this file last: it is there, and not older than the lock, only after a full install.
const installed = join(root, 'node_modules', '.package-lock.json');
const lock = join(root, 'package-lock.json');

function isCurrent() {
  return existsSync(installed) && statSync(installed).mtimeMs >= statSync(lock).mtimeMs;
}

/**
 * Where this very Node keeps its C headers, or undefined. The SQLite addon is compiled where no
 * prebuilt file can be had; with local headers that works without a second download.
 */
function headersOfThisNode() {
  const prefix = join(dirname(realpathSync(process.execPath)), '..');
  const file = join(prefix, 'include', 'node', 'node_version.h');
  if (!existsSync(file)) return undefined;
  const text = readFileSync(file, 'utf8');
  const part = (name) => new RegExp(`#define NODE_${name}_VERSION (\\d+)`).exec(text)?.[1];
  const version = `${part('MAJOR')}.${part('MINOR')}.${part('PATCH')}`;
  return version === process.versions.node ? prefix : undefined;
}

function install() {
  const env = { ...process.env };
  const headers = headersOfThisNode();
  if (headers !== undefined) env.npm_config_nodedir ??= headers;
  const { status, error } = spawnSync('npm', ['ci', '--engine-strict'], {
    cwd: root,
    env,
    stdio: 'inherit',
  });
  if (error) console.error(`npm could not be started: ${error.message}; put npm on the PATH`);
  return status ?? 3;
}

if (!isCurrent()) {
  console.log('installing the locked dependencies');
  process.exitCode = install();
}
