import { posix } from "node:path";
import ts from "typescript";

type Asked = Map<string, string[]>;

/** Sources by path, as far as routes and their parts go. */
export type Sources = Map<string, string>;

/**
 * Loaders and actions of a route that do not ask who is there in their first statement, through one of `guards` or through a
 * function of the route's parts that does. A page without a loader is named too: going to it in the browser runs no guard.
 */
export function unguarded(file: string, sources: Sources, guards: string[]): string[] {
	const route = parse(file, sources);
	const asked = new Map([...askedIn(route), ...askedInParts(file, route, sources)]);
	const findings: string[] = [];
	const exported = exportedFunctions(route);
	for (const name of ["loader", "action"]) {
		const body = exported.get(name);
		if (!body) continue;
		const calls = callsIn(firstStatement(body)).flatMap((call) => [call, ...(asked.get(call) ?? [])]);
		if (!calls.some((call) => guards.includes(call)))
			findings.push(`${file} ${name} does not begin with ${guards.join(" or ")}`);
	}
	if (exported.has("default") && !exported.has("loader")) findings.push(`${file} is a page without a loader`);
	return findings;
}

function parse(file: string, sources: Sources): ts.SourceFile {
	return ts.createSourceFile(file, sources.get(file) ?? "", ts.ScriptTarget.Latest, true);
}

function exportedFunctions(source: ts.SourceFile): Map<string, ts.Node> {
	const found = new Map<string, ts.Node>();
	for (const statement of source.statements) {
		const modifiers = ts.canHaveModifiers(statement) ? (ts.getModifiers(statement) ?? []) : [];
		const has = (kind: ts.SyntaxKind) => modifiers.some((modifier) => modifier.kind === kind);
		if (ts.isExportAssignment(statement)) found.set("default", statement);
		if (!has(ts.SyntaxKind.ExportKeyword)) continue;
		if (has(ts.SyntaxKind.DefaultKeyword)) found.set("default", statement);
		else if (ts.isFunctionDeclaration(statement) && statement.name && statement.body)
			found.set(statement.name.text, statement.body);
		else if (ts.isVariableStatement(statement)) {
			for (const { name, initializer } of statement.declarationList.declarations) {
				if (initializer) found.set(name.getText(), ts.isArrowFunction(initializer) ? initializer.body : initializer);
			}
		}
	}
	return found;
}

const firstStatement = (body: ts.Node): ts.Node => (ts.isBlock(body) ? (body.statements[0] ?? body) : body);

/** The functions that a piece of code calls by name. */
function callsIn(node: ts.Node): string[] {
	const own = ts.isCallExpression(node) && ts.isIdentifier(node.expression) ? [node.expression.text] : [];
	const inner: string[] = [];
	ts.forEachChild(node, (child) => void inner.push(...callsIn(child)));
	return [...own, ...inner];
}

/** What each top-level function of a file asks first, by itself or through another of the file. */
function askedIn(source: ts.SourceFile): Asked {
	const functions = source.statements.filter(ts.isFunctionDeclaration);
	const own = new Map(
		functions.flatMap(({ name, body }) => (name && body ? [[name.text, callsIn(firstStatement(body))] as const] : [])),
	);
	return new Map([...own].map(([name, calls]) => [name, calls.flatMap((call) => [call, ...(own.get(call) ?? [])])]));
}

function askedInParts(file: string, route: ts.SourceFile, sources: Sources): Asked {
	const parts = route.statements.flatMap((statement) =>
		ts.isImportDeclaration(statement) && ts.isStringLiteral(statement.moduleSpecifier)
			? [statement.moduleSpecifier.text]
			: [],
	);
	const paths = parts
		.filter((part) => part.startsWith("./parts/"))
		.map((part) => posix.join(posix.dirname(file), part));
	return new Map(paths.flatMap((path) => [...askedIn(parse(path, sources))]));
}
