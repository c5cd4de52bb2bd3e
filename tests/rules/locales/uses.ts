import ts from "typescript";

/**
 * One place where code names a key. `parts` are the written pieces, with a hole between each two: `error.${code}.title` is
 * ["error.", ".title"]. Without a namespace the key may be of any. `given` are the values handed over, null where unknown.
 */
export type Use = { at: string; namespace: string | null; parts: string[]; given: Set<string> | null };

/** What a file tells of keys: uses that must exist, texts that may be keys, and every word that could fill a hole. */
export type Uses = { named: Use[]; mentioned: Set<string>; words: Set<string> };

export function usesIn(file: string, text: string, namespaces: string[]): Uses {
	const source = ts.createSourceFile(file, text, ts.ScriptTarget.Latest, true);
	const uses: Uses = { named: [], mentioned: new Set(), words: new Set() };
	/** `desk:today.title`, and `mail:${kind}.subject`; not "access:", said to nobody. */
	const startsKey = (parts: string[]) => {
		const [namespace, rest] = parts[0]!.split(":");
		return rest !== undefined && namespaces.includes(namespace!) && (rest !== "" || parts.length > 1);
	};
	const add = (node: ts.Node, parts: string[], namespace: string | null, given: Set<string> | null) => {
		const { line } = source.getLineAndCharacterOfPosition(node.getStart());
		const named = startsKey(parts) ? parts[0]!.split(":")[0]! : namespace;
		const bare = startsKey(parts) ? [parts[0]!.slice(named!.length + 1), ...parts.slice(1)] : parts;
		uses.named.push({ at: `${file}:${line + 1}`, namespace: named, parts: bare, given });
	};

	const visit = (node: ts.Node, namespace: string | null): void => {
		let inside = namespace;
		if (ts.isFunctionLike(node) && node.parameters.some(({ name }) => bindsT(name))) inside = null;
		if (ts.isBlock(node) || ts.isSourceFile(node)) inside = namespaceOf(node) ?? inside;
		if (isTranslation(node)) {
			const given = valuesGiven(node.arguments[1]);
			for (const parts of keysIn(node.arguments[0])) add(node, parts, inside, given);
		} else if (ts.isJsxAttribute(node) && node.name.getText() === "i18nKey" && node.initializer) {
			for (const parts of keysIn(node.initializer)) add(node, parts, null, null);
		} else if (ts.isStringLiteralLike(node) || ts.isTemplateExpression(node)) {
			const parts = partsOf(node);
			if (startsKey(parts) && !isInTranslation(node)) add(node, parts, null, null);
		}
		if (ts.isStringLiteralLike(node)) uses.mentioned.add(node.text);
		if (ts.isStringLiteralLike(node) || ts.isIdentifier(node)) uses.words.add(node.text);
		ts.forEachChild(node, (child) => visit(child, inside));
	};
	visit(source, null);
	return uses;
}

export function joinUses(all: Uses[]): Uses {
	return {
		named: all.flatMap(({ named }) => named),
		mentioned: new Set(all.flatMap(({ mentioned }) => [...mentioned])),
		words: new Set(all.flatMap(({ words }) => [...words])),
	};
}

function isTranslation(node: ts.Node): node is ts.CallExpression {
	if (!ts.isCallExpression(node)) return false;
	const { expression } = node;
	return (
		(ts.isIdentifier(expression) && expression.text === "t") ||
		(ts.isPropertyAccessExpression(expression) && expression.name.text === "t")
	);
}

/** A key in a call of `t` is judged there, with the namespace that `t` speaks for. */
function isInTranslation(node: ts.Node): boolean {
	for (let up: ts.Node = node; up.parent && ts.isExpression(up); up = up.parent) {
		if (isTranslation(up.parent) && up.parent.arguments[0] === up) return true;
	}
	return false;
}

/** The keys an expression can come to; what is not written out here is left to `mentioned`. */
function keysIn(node: ts.Node | undefined): string[][] {
	if (!node) return [];
	if (ts.isStringLiteralLike(node) || ts.isTemplateExpression(node)) return [partsOf(node)];
	if (ts.isConditionalExpression(node)) return [...keysIn(node.whenTrue), ...keysIn(node.whenFalse)];
	if (ts.isArrayLiteralExpression(node)) return node.elements.flatMap(keysIn);
	if (ts.isBinaryExpression(node)) return [...keysIn(node.left), ...keysIn(node.right)];
	if (ts.isParenthesizedExpression(node) || ts.isAsExpression(node) || ts.isJsxExpression(node))
		return keysIn(node.expression);
	return [];
}

function partsOf(node: ts.StringLiteralLike | ts.TemplateExpression): string[] {
	return ts.isTemplateExpression(node)
		? [node.head.text, ...node.templateSpans.map(({ literal }) => literal.text)]
		: [node.text];
}

function valuesGiven(node: ts.Expression | undefined): Set<string> | null {
	if (!node) return new Set();
	if (!ts.isObjectLiteralExpression(node) || node.properties.some(ts.isSpreadAssignment)) return null;
	return new Set(node.properties.map((property) => property.name?.getText() ?? ""));
}

const bindsT = (name: ts.BindingName): boolean =>
	ts.isIdentifier(name) ? name.text === "t" : name.elements.some((one) => ts.isBindingElement(one) && bindsT(one.name));

/** The namespace of a `t` made among a block's own statements: of useTranslation, getT or getFixedT. */
function namespaceOf(block: ts.Block | ts.SourceFile): string | undefined {
	for (const statement of block.statements.filter(ts.isVariableStatement)) {
		for (const { name, initializer } of statement.declarationList.declarations) {
			if (!bindsT(name) || !initializer || !ts.isCallExpression(initializer)) continue;
			const stated = initializer.arguments.find((argument, index) => ts.isStringLiteral(argument) && index < 2);
			return stated && ts.isStringLiteral(stated) ? stated.text : "common";
		}
	}
	return undefined;
}
