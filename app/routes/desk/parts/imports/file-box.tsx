import { useTranslation } from "react-i18next";
import { describedBy, FieldFrame, FieldHelp, fieldId, FieldProblem } from "#app/components/field-frame.tsx";
import { fileButton } from "#app/components/file-button.ts";
import { mostFileBytes, mostRows } from "#app/directory/import/cells.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";

/** The box for a list's file. */
export function FileBox({ problem }: { problem?: Problem }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const help = t("import.fileHelp", { rows: format.number(mostRows), max: format.number(mostFileBytes / 1024 / 1024) });
	return (
		<FieldFrame problem={problem}>
			<label htmlFor={fieldId("file")} className="font-bold">
				{t("import.file")}
			</label>
			<FieldHelp name="file">{help}</FieldHelp>
			<FieldProblem name="file" label={t("import.file")} problem={problem} />
			<input
				type="file"
				id={fieldId("file")}
				name="file"
				accept=".csv,.tsv,.txt,.xlsx,text/csv"
				aria-describedby={describedBy("file", help, problem)}
				aria-invalid={problem ? true : undefined}
				className={`mt-1.5 block min-h-11 max-w-full ${fileButton}`}
			/>
		</FieldFrame>
	);
}
