import ts from "typescript";

/** The methods of a schema whose last argument is what goes wrong. */
const judges =
	/^(min|max|length|regex|int|positive|nonnegative|multipleOf|uuid|email|url|iso|date|number|string|gte?|lte?)$/;
const code = /^[a-z]+(_[a-z]+)*$/;

/** Codes of problems that a file can give a field: in a schema, or in a problem made by hand (`{ code: "date_order" }`). */
export function problemCodesIn(file: string, text: string): string[] {
	const source = ts.createSourceFile(file, text, ts.ScriptTarget.Latest, true);
	const hasSchemas = /from "zod"/.test(text);
	const found: string[] = [];
	const add = (node: ts.Node | undefined) => {
		if (node && ts.isStringLiteral(node) && code.test(node.text)) found.push(node.text);
	};
	const visit = (node: ts.Node): void => {
		if (ts.isPropertyAssignment(node) && /^(code|error)$/.test(node.name.getText())) add(node.initializer);
		if (hasSchemas && ts.isCallExpression(node) && ts.isPropertyAccessExpression(node.expression)) {
			if (judges.test(node.expression.name.text)) add(node.arguments.at(-1));
		}
		ts.forEachChild(node, visit);
	};
	visit(source);
	return found;
}
