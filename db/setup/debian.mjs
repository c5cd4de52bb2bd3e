// Debian's packages, where they may be installed: as root, or with sudo that asks for no password.
import { existsSync } from "node:fs";
import { isRoot } from "./local.mjs";
import { run } from "./run.mjs";
import { Stop } from "./steps.mjs";

async function sudoWorks() {
	try {
		return (await run("sudo", ["-n", "true"], { mayFail: true })).code === 0;
	} catch {
		return false; // no sudo on this machine
	}
}

/** Shell text that installs packages without a question; also shown to those who must run it themselves. */
function installCommand(packages, before) {
	const apt = "DEBIAN_FRONTEND=noninteractive apt-get -o DPkg::Lock::Timeout=300";
	const install = `${apt} install -y --no-install-recommends -o Dpkg::Options::=--force-confold ${packages.join(" ")}`;
	return [...before, `${apt} update`, install].join(" && ");
}

/**
 * Installs Debian packages, or stops with the command to run.
 * @param what the thing missing, in words.
 * @param before shell commands to run first, with the same rights.
 */
export async function installDebian(packages, { what, before = [] }) {
	if (!existsSync("/usr/bin/apt-get")) {
		throw new Stop(
			`${what} is missing and this is not a Debian system. Install it with your system's packages, then start again.`,
		);
	}
	const command = installCommand(packages, before);
	if (isRoot) return run("sh", ["-c", command], { unbroken: true });
	if (await sudoWorks()) return run("sudo", ["-n", "sh", "-c", command], { unbroken: true });
	throw new Stop(
		`${what} is missing, and installing it needs an administrator. Run this, then start again:\n\n  sudo sh -c '${command}'\n`,
	);
}
