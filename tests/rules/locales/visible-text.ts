import ts from "typescript";

const readAloud = new Set(["aria-label", "aria-description", "aria-roledescription", "title", "alt", "placeholder"]);
/** Props of our own components that are shown as they stand. */
const shownProps = new Set(["label", "lead", "help", "heading", "term", "detail", "caption", "empty"]);
const letters = /\p{L}/u;

/** Texts in a page's markup that a person sees or hears and that do not come from the locales. */
export function visibleTexts(file: string, text: string): string[] {
	const source = ts.createSourceFile(file, text, ts.ScriptTarget.Latest, true, ts.ScriptKind.TSX);
	const findings: string[] = [];
	const report = (node: ts.Node, words: string) => {
		const { line } = source.getLineAndCharacterOfPosition(node.getStart());
		findings.push(`${file}:${line + 1} "${words.trim()}"`);
	};
	const visit = (node: ts.Node): void => {
		if (ts.isJsxText(node) && letters.test(node.text)) report(node, node.text);
		if (ts.isJsxExpression(node) && !ts.isJsxAttribute(node.parent)) {
			for (const words of literalsIn(node.expression)) if (letters.test(words)) report(node, words);
		}
		if (ts.isJsxAttribute(node)) {
			for (const words of literalsIn(node.initializer)) if (isText(node.name.getText(), words)) report(node, words);
		}
		ts.forEachChild(node, visit);
	};
	visit(source);
	return findings;
}

/** A prop of a component can also hold a key or a kind, which is neither capitalised nor of several words. */
function isText(prop: string, words: string): boolean {
	if (readAloud.has(prop)) return letters.test(words);
	return shownProps.has(prop) && /^\p{Lu}|\p{L}\s+\p{L}/u.test(words);
}

/** What an expression shows as it is written: either branch of a choice, a template's own words, a fallback. */
function literalsIn(node: ts.Node | undefined): string[] {
	if (!node) return [];
	if (ts.isStringLiteralLike(node)) return [node.text];
	if (ts.isTemplateExpression(node)) return [node.head.text, ...node.templateSpans.map(({ literal }) => literal.text)];
	if (ts.isConditionalExpression(node)) return [...literalsIn(node.whenTrue), ...literalsIn(node.whenFalse)];
	if (ts.isParenthesizedExpression(node) || ts.isJsxExpression(node)) return literalsIn(node.expression);
	if (!ts.isBinaryExpression(node)) return [];
	const operator = node.operatorToken.kind;
	if (operator === ts.SyntaxKind.AmpersandAmpersandToken) return literalsIn(node.right);
	return joins.includes(operator) ? [...literalsIn(node.left), ...literalsIn(node.right)] : [];
}

const joins = [
	ts.SyntaxKind.PlusToken,
	ts.SyntaxKind.BarBarToken,
	ts.SyntaxKind.QuestionQuestionToken,
] as ts.SyntaxKind[];
