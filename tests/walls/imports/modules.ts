import { readFile } from "node:fs/promises";
import { posix } from "node:path";
import ts from "typescript";

/** One import of one file. `to` is a path from the project's root, or `package:name` for what is not ours. */
export type Import = { to: string; typeOnly: boolean; names: string[] };

/** What the rules ask of a file: whom it imports, and which expressions in it read the clock or draw lots. */
export type Module = { imports: Import[]; impure: string[] };
export type Modules = Map<string, Module>;

const clockOrChance = new Set(["Date.now", "performance.now", "Math.random"]);
const chanceNames = new Set(["randomUUID", "randomBytes", "randomInt", "getRandomValues"]);

export async function readModules(root: string, files: string[]): Promise<Modules> {
	const read = async (file: string) =>
		[file, parseModule(file, await readFile(posix.join(root, file), "utf8"))] as const;
	return new Map(await Promise.all(files.map(read)));
}

/** Parses one file for its imports; types generated for routes (`+types`) are left out, as no file of ours. */
export function parseModule(file: string, text: string): Module {
	const source = ts.createSourceFile(file, text, ts.ScriptTarget.Latest, true);
	const found: Module = { imports: [], impure: [] };
	const visit = (node: ts.Node): void => {
		const made = importOf(node);
		const to = made && resolve(file, made.specifier);
		if (made && to && !to.includes("+types/")) found.imports.push({ ...made.import, to });
		const impure = impureText(node);
		if (impure) found.impure.push(impure);
		ts.forEachChild(node, visit);
	};
	visit(source);
	return found;
}

function importOf(node: ts.Node): { specifier: string; import: Omit<Import, "to"> } | undefined {
	if (ts.isImportDeclaration(node)) {
		const { importClause, moduleSpecifier } = node;
		return { specifier: textOf(moduleSpecifier), import: clauseOf(importClause) };
	}
	if (ts.isExportDeclaration(node) && node.moduleSpecifier) {
		const elements = node.exportClause && ts.isNamedExports(node.exportClause) ? [...node.exportClause.elements] : null;
		return { specifier: textOf(node.moduleSpecifier), import: listOf(node.isTypeOnly, elements) };
	}
	if (ts.isCallExpression(node) && node.expression.kind === ts.SyntaxKind.ImportKeyword) {
		return { specifier: textOf(node.arguments[0]), import: { typeOnly: false, names: ["*"] } };
	}
	if (ts.isImportTypeNode(node) && ts.isLiteralTypeNode(node.argument)) {
		return { specifier: textOf(node.argument.literal), import: { typeOnly: true, names: ["*"] } };
	}
	return undefined;
}

function clauseOf(clause: ts.ImportClause | undefined): Omit<Import, "to"> {
	if (!clause) return { typeOnly: false, names: [] }; // for its effect, as a style sheet
	const { name, namedBindings } = clause;
	const typeOnly = clause.phaseModifier === ts.SyntaxKind.TypeKeyword;
	if (namedBindings && ts.isNamedImports(namedBindings)) {
		const list = listOf(typeOnly, [...namedBindings.elements]);
		return name ? { typeOnly, names: ["default", ...list.names] } : list;
	}
	return { typeOnly, names: [namedBindings ? "*" : "default"] };
}

/** A list of which every name is marked `type` leaves nothing at run time, like one that is marked as a whole. */
function listOf(typeOnly: boolean, elements: (ts.ImportSpecifier | ts.ExportSpecifier)[] | null): Omit<Import, "to"> {
	if (!elements) return { typeOnly, names: ["*"] };
	const values = elements.filter((element) => !element.isTypeOnly);
	const names = (typeOnly ? elements : values).map((element) => (element.propertyName ?? element.name).text);
	return { typeOnly: typeOnly || (elements.length > 0 && values.length === 0), names };
}

function textOf(node: ts.Node | undefined): string {
	if (node && ts.isStringLiteralLike(node)) return node.text;
	throw new Error(`an import whose module is not written out cannot be checked: ${node?.getText() ?? "nothing"}`);
}

function resolve(file: string, specifier: string): string {
	if (specifier.startsWith("#")) return specifier.slice(1);
	if (specifier.startsWith(".")) return posix.join(posix.dirname(file), specifier);
	return `package:${specifier}`;
}

function impureText(node: ts.Node): string | undefined {
	if (ts.isNewExpression(node) && node.expression.getText() === "Date" && !node.arguments?.length) return "new Date()";
	if (ts.isCallExpression(node) && node.expression.getText() === "Date") return "Date()";
	if (ts.isPropertyAccessExpression(node) && clockOrChance.has(node.getText())) return node.getText();
	if (ts.isIdentifier(node) && chanceNames.has(node.text)) return node.text;
	return undefined;
}
