// What npm cannot bring: the database server with PostGIS and, for the tests, Chromium with a font.
// Package names carry the version of PostgreSQL (postgresql-15-postgis-3), so they are looked up, not written down.
import { existsSync } from 'node:fs';
import { installedPostgres, usablePostgres } from '../postgres/installedPostgres.mjs';
import { CommandFailed, commandWorks, runCommand } from '../process/runCommand.mjs';
import { Problem, say } from '../progress.mjs';

/** Debian's post-install step of postgresql-NN would create and start a cluster of its own; this file forbids it meanwhile. */
const noMainCluster = '/etc/postgresql-common/createcluster.d/patchrow.conf';
const apt = 'DEBIAN_FRONTEND=noninteractive apt-get -q -o DPkg::Lock::Timeout=300 -o Acquire::Retries=3';
const chromiumFiles = { chromium: '/usr/bin/chromium', 'fonts-dejavu-core': '/usr/share/fonts/truetype/dejavu/DejaVuSans.ttf' };

/** Newest PostgreSQL for which PostGIS is packaged, from the names in the package lists; null when there is none. */
export function newestWithPostgis(packageNames) {
  const versions = packageNames.map((name) => /^postgresql-(\d+)-postgis-3$/.exec(name)?.[1]).filter((version) => version !== undefined);
  return versions.length === 0 ? null : Math.max(...versions.map(Number));
}

const databasePackages = (version) => [`postgresql-${version}`, `postgresql-${version}-postgis-3`];

/** Shell command that installs the packages without creating the default cluster. */
export function installCommand(packages) {
  const install = `${apt} install -y --no-install-recommends ${packages.join(' ')}`;
  if (!packages.some((name) => name.startsWith('postgresql'))) return install;
  return [
    'mkdir -p /etc/postgresql-common/createcluster.d',
    `echo 'create_main_cluster = false' > ${noMainCluster}`,
    `{ ${install}; result=$?; rm -f ${noMainCluster}; exit $result; }`,
  ].join(' && ');
}

/** How to become root: [] as root, ['sudo', '-n'] where sudo asks for no password, null otherwise. */
async function waysToRoot() {
  if (process.getuid() === 0) return [];
  return (await commandWorks('sudo', ['-n', 'true'])) ? ['sudo', '-n'] : null;
}

async function asRoot(prefix, script) {
  const [command, ...args] = [...prefix, 'sh', '-c', script];
  await runCommand(command, args, { isFinishedAlways: true });
}

async function knownPackageNames() {
  return (await runCommand('apt-cache', ['pkgnames', 'postgresql-'])).split('\n');
}

/** Packages for the database; a server that is there already only gets its own PostGIS. */
async function missingDatabasePackages() {
  if (usablePostgres() !== undefined) return [];
  const names = await knownPackageNames();
  const extensible = installedPostgres().find(({ version }) => names.includes(`postgresql-${version}-postgis-3`));
  if (extensible !== undefined) return databasePackages(extensible.version);
  const version = newestWithPostgis(names);
  return version === null ? ['postgresql', 'postgresql-postgis'] : databasePackages(version);
}

const missingBrowserPackages = () => Object.entries(chromiumFiles).filter(([, file]) => !existsSync(file)).map(([name]) => name);

async function missingPackages({ database, browser }) {
  return [...(database ? await missingDatabasePackages() : []), ...(browser ? missingBrowserPackages() : [])];
}

function byHand(packages) {
  const script = `apt-get update && ${installCommand(packages)}`;
  return new Problem(`Patchrow needs these Debian packages: ${packages.join(', ')}.\nRun this once as a user who may use sudo, then repeat your command:\n\n  sudo sh -c "${script.replaceAll('$', '\\$')}"\n`);
}

/** Installs what is missing of the wanted groups (`database`, `browser`), or stops with the command to run by hand. */
export async function setUpDebianPackages(wanted) {
  const isMissing = (wanted.database && usablePostgres() === undefined) || (wanted.browser && missingBrowserPackages().length > 0);
  if (!isMissing) return;
  if (!existsSync('/usr/bin/apt-get')) {
    throw new Problem('PostgreSQL with PostGIS (and Chromium for the tests) is needed, and this machine has no apt. Install them, or set DATABASE_URL to a PostgreSQL server that has PostGIS.');
  }
  const prefix = await waysToRoot();
  if (prefix === null) throw byHand(await missingPackages(wanted));
  try {
    say('Reading the list of Debian packages …');
    await asRoot(prefix, `${apt} update`);
    const packages = await missingPackages(wanted);
    say(`Installing Debian packages: ${packages.join(', ')} …`);
    await asRoot(prefix, installCommand(packages));
  } catch (error) {
    if (!(error instanceof CommandFailed)) throw error;
    throw new Problem(`The Debian packages could not be installed.\n${error.message}\n\n${byHand(await missingPackages(wanted)).message}`);
  }
  const left = await missingPackages(wanted);
  if (left.length > 0) throw byHand(left);
}
