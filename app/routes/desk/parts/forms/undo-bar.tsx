import { useTranslation } from "react-i18next";
import { Form, href } from "react-router";
import type { FormDifference } from "#app/collect/editing/difference.ts";
import { Button } from "#app/components/button.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { useDifferenceWords } from "./finding-words.ts";

type UndoBarProps = {
	formId: string;
	last: { edit: number; by: string | null; at: Date | null; differences: FormDifference[] };
};

/** The last change, by whom, and the way back. */
export function UndoBar({ formId, last }: UndoBarProps) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const words = useDifferenceWords();
	const [first] = last.differences;
	return (
		<Form
			method="post"
			action={`${href("/desk/forms/:formId", { formId })}?index`}
			className="no-print mb-6 flex flex-wrap items-center gap-x-4 gap-y-2 border-y border-rule py-2 text-sm"
		>
			<span className="min-w-0 flex-1 basis-64 text-quiet">
				{t("undo.last", {
					name: last.by ?? "",
					when: last.at ? format.moment(last.at) : "",
					change: first ? words(first) : t("undo.other"),
				})}
			</span>
			<input type="hidden" name="edit" value={last.edit} />
			<Button kind="secondary" size="small" name="intent" value="undo">
				{t("undo.button")}
			</Button>
		</Form>
	);
}
