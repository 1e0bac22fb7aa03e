import { existsSync, mkdirSync, writeFileSync } from 'node:fs';
import { run } from './run.mjs';
import { say, SetupError } from './say.mjs';

/** Debian's package makes a cluster of its own on the usual port; ours is made by us. */
function keepClusterUnmade(asRoot) {
  const folder = '/etc/postgresql-common/createcluster.d';
  const file = `${folder}/no-main.conf`;
  if (existsSync(file)) return;
  if (asRoot) {
    mkdirSync(folder, { recursive: true });
    writeFileSync(file, 'create_main_cluster = false\n');
    return;
  }
  run('sudo', ['-n', 'mkdir', '-p', folder]);
  run('sudo', ['-n', 'sh', '-c', `echo "create_main_cluster = false" > ${file}`]);
}

/** Installs packages of Debian, as root or through sudo without a password. @throws SetupError */
export function installDebianPackages(packages, purpose) {
  const names = packages.join(' ');
  const byHand = `As root, run: apt-get install ${names}`;
  if (!existsSync('/usr/bin/apt-get'))
    throw new SetupError(
      `${purpose} is missing, and this is not Debian. Install ${names} by hand.`,
    );
  const asRoot = process.getuid?.() === 0;
  if (!asRoot && !run('sudo', ['-n', 'true']).ok)
    throw new SetupError(`${purpose} is missing, and only root may install it. ${byHand}`);
  say(`Installing ${purpose} (${names}) …`);
  if (packages.includes('postgresql')) keepClusterUnmade(asRoot);
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
  const asInstaller = (command, ...args) =>
    asRoot
      ? run(command, args, { env })
      : run('sudo', ['-n', 'env', 'DEBIAN_FRONTEND=noninteractive', command, ...args]);
  const install = () =>
    asInstaller(
      'apt-get',
      'install',
      '-y',
      '-o',
      'DPkg::Lock::Timeout=300',
      '--no-install-recommends',
      ...packages,
    );
  const updated = asInstaller('apt-get', 'update');
  let installed = install();
  if (!installed.ok && /dpkg --configure -a/.test(installed.output)) {
    say('An earlier installation was broken off. Finishing it …');
    asInstaller('dpkg', '--configure', '-a');
    installed = install();
  }
  if (installed.ok) return;
  const errors = `${updated.output}\n${installed.output}`
    .split('\n')
    .filter((line) => /^(E|W): /.test(line));
  throw new SetupError(
    `${purpose} could not be installed (${errors.slice(-2).join(' ')}). If Debian's packages cannot be reached from here, check the connection and try again. ${byHand}`,
  );
}
