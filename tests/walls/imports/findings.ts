import type { Import, Module, Modules } from "./modules.ts";
import {
	exceptions,
	guardFile,
	holdsServerCode,
	notReadersSide,
	pureFolders,
	readersGuards,
	readersReach,
	readersSide,
	table,
	whoIsAsking,
} from "./table.ts";

const within = (file: string, folders: string[]) => folders.some((folder) => file.startsWith(folder));
const isPackage = (to: string) => to.startsWith("package:");
const isServer = (file: string) => /\.server\.tsx?$/.test(file);
const isScript = (file: string) => /\.(ts|tsx|mts|mjs|json)$/.test(file);
const excepted = (from: string, to: string) => exceptions.some((one) => one.from === from && one.to === to);

/** Every import that breaks a rule, as a line that names both ends and the rule. */
export function wrongImports(modules: Modules): string[] {
	const findings: string[] = [];
	for (const [file, module] of modules) {
		findings.push(...againstTable(file, module), ...serverCodeInPages(file, module));
		if (within(file, pureFolders) && !isServer(file)) findings.push(...impurities(file, modules));
		if (onReadersSide(file)) findings.push(...pastTheReader(file, module, modules));
	}
	return findings;
}

/** Exceptions that no file makes use of. */
export function idleExceptions(modules: Modules): string[] {
	const made = new Set([...modules].flatMap(([from, { imports }]) => imports.map(({ to }) => `${from} -> ${to}`)));
	return exceptions.map(({ from, to }) => `${from} -> ${to}`).filter((line) => !made.has(line));
}

/** The row of `app/` is for the few files that stand at its top: a folder in it needs a row of its own. */
const liesIn = (file: string, folder: string) =>
	folder === "app/" ? /^app\/[^/]+$/.test(file) : file.startsWith(folder);

function againstTable(file: string, { imports }: Module): string[] {
	const row = table
		.filter(({ folder }) => liesIn(file, folder))
		.toSorted((a, b) => b.folder.length - a.folder.length)[0];
	if (!row) return [`${file} lies in no folder of the table`];
	const allowed = ({ to, typeOnly }: Import) =>
		isPackage(to) ||
		!isScript(to) ||
		liesIn(to, row.folder) ||
		within(to, [...row.values, ...(typeOnly ? row.types : [])]) ||
		excepted(file, to);
	return imports
		.filter((one) => !allowed(one))
		.map((one) => `${file} imports ${one.typeOnly ? "types of " : ""}${one.to}: not in its row of the table`);
}

const reachesServer = ({ to, typeOnly }: Import) => !typeOnly && (isServer(to) || to.startsWith("package:node:"));

function serverCodeInPages(file: string, { imports }: Module): string[] {
	if (holdsServerCode.test(file)) return [];
	return imports
		.filter((one) => reachesServer(one) && !excepted(file, one.to))
		.map(({ to }) => `${file} imports ${to}: a browser can be given it`);
}

const pageOrNode = /^package:(react|i18next|node:)/;

function impurities(file: string, modules: Modules): string[] {
	const findings: string[] = [];
	for (const { path, module } of reached(file, modules, () => false)) {
		const at = path.join(" -> ");
		findings.push(...module.impure.map((text) => `${at} uses ${text}: not pure`));
		const wrong = module.imports.filter(({ to, typeOnly }) => !typeOnly && (isServer(to) || pageOrNode.test(to)));
		findings.push(...wrong.map(({ to }) => `${at} imports ${to}: not pure`));
	}
	return findings;
}

const isDoor = (file: string) => file.startsWith(whoIsAsking);
const onReadersSide = (file: string) => within(file, readersSide) && !within(file, notReadersSide);

/** Walks what a file of the reader's side imports to run, and names each way to what lies left of the release. */
function pastTheReader(start: string, { imports }: Module, modules: Modules): string[] {
	const findings: string[] = [];
	for (const { to, names } of imports.filter((one) => one.to === guardFile && !one.typeOnly)) {
		const wide = names.filter((name) => !readersGuards.includes(name));
		if (wide.length > 0) findings.push(`${start} takes ${wide.join(", ")} from ${to}: sees past the reader`);
	}
	for (const { path, module } of reached(start, modules, isDoor)) {
		const file = path.at(-1)!;
		if (isDoor(file)) continue;
		for (const { to, typeOnly } of module.imports) {
			if (typeOnly || isPackage(to) || !isScript(to) || excepted(file, to)) continue;
			const behind = to === "app/auth/scope.server.ts" || within(to, notReadersSide);
			if (!behind && (isDoor(to) || within(to, readersReach) || to.startsWith("locales/"))) continue;
			findings.push(`${[...path, to].join(" -> ")}: past the reader`);
		}
	}
	return findings;
}

/** All that runs when `start` is imported, each with one path to it. The walk does not go on from where `stops` says. */
function reached(start: string, modules: Modules, stops: (file: string) => boolean) {
	const found = new Map<string, string[]>([[start, [start]]]);
	const queue = [start];
	for (let file = queue.shift(); file !== undefined; file = queue.shift()) {
		if (stops(file)) continue;
		for (const { to, typeOnly } of modules.get(file)?.imports ?? []) {
			if (typeOnly || found.has(to) || !modules.has(to)) continue;
			found.set(to, [...found.get(file)!, to]);
			queue.push(to);
		}
	}
	return [...found].map(([file, path]) => ({ path, module: modules.get(file)! }));
}
