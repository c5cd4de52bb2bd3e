import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import { Button } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { inputClasses } from "#app/components/field-frame.tsx";
import { useProblemText } from "#app/components/problem-text.ts";
import { textOf } from "#app/directory/import/cells.ts";
import type { ImportRow, rowFilters } from "#app/directory/import/import-rows.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";

type RowTableProps = { rows: ImportRow[]; show: (typeof rowFilters)[number]; header: string[] };

/** Rows of a file: with what is to be mended, or with whom each one is in the list. */
export function RowTable({ rows, show, header }: RowTableProps) {
	if (show === "bad") return <BadRows rows={rows} header={header} />;
	return show === "matched" && rows.length > 0 ? <MatchedRows rows={rows} /> : <NewRows rows={rows} />;
}

function BadRows({ rows, header }: { rows: ImportRow[]; header: string[] }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const words = useProblemText();
	return (
		<DataTable
			caption={t("import.rowsTitle")}
			captionHidden
			rows={rows}
			rowKey={(row) => String(row.number)}
			columns={[
				{ key: "row", header: t("import.rowNumber"), cell: (row) => format.number(row.number) },
				{
					key: "problems",
					header: t("import.toMend"),
					cell: (row) => (
						<ul className="min-w-64">
							{row.problems.map((problem) => (
								<li key={problem.field + problem.code}>{words(problem, t(`import.field.${problem.field}`))}</li>
							))}
						</ul>
					),
				},
				{
					key: "cells",
					header: t("import.inFile"),
					cell: (row) => (
						<span className="block min-w-64 wrap-anywhere text-quiet">
							{(row.cells ?? [])
								.map((cell, index) => ({ text: textOf(cell), heading: header[index] }))
								.filter(({ text }) => text !== "")
								.slice(0, 8)
								.map(({ text, heading }) => (heading ? `${heading}: ${text}` : text))
								.join(" · ")}
						</span>
					),
				},
			]}
		/>
	);
}

function NewRows({ rows }: { rows: ImportRow[] }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<DataTable
			caption={t("import.rowsTitle")}
			captionHidden
			rows={rows}
			rowKey={(row) => String(row.number)}
			columns={[
				{ key: "row", header: t("import.rowNumber"), cell: (row) => format.number(row.number) },
				{ key: "name", header: t("import.field.name"), cell: (row) => row.entry?.name },
				{ key: "contact", header: t("import.field.contactName"), cell: (row) => row.entry?.contactName },
				{ key: "email", header: t("import.field.email"), cell: (row) => row.entry?.email },
				{ key: "crop", header: t("import.field.crop"), cell: (row) => <CropOf row={row} /> },
			]}
		/>
	);
}

function CropOf({ row }: { row: ImportRow }) {
	const { t } = useTranslation("growers");
	const planting = row.entry?.planting;
	return planting ? t(`common:crop.${planting.cropKey}`) : "";
}

/** Growers who are in the list already: what becomes of each is chosen here, for all at once or one by one. */
function MatchedRows({ rows }: { rows: ImportRow[] }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<>
			<Form method="post" className="mb-4 flex flex-wrap gap-3">
				<input type="hidden" name="step" value="all" />
				{(["update", "skip"] as const).map((choice) => (
					<Button key={choice} kind="secondary" size="small" name="choice" value={choice}>
						{t(`import.all.${choice}`)}
					</Button>
				))}
			</Form>
			<Form method="post" key={rows.map(({ number, choice }) => `${number}${choice}`).join()}>
				<DataTable
					caption={t("import.rowsTitle")}
					captionHidden
					rows={rows}
					rowKey={(row) => String(row.number)}
					columns={[
						{ key: "row", header: t("import.rowNumber"), cell: (row) => format.number(row.number) },
						{ key: "name", header: t("import.field.name"), cell: (row) => row.entry?.name },
						{ key: "email", header: t("import.field.email"), cell: (row) => row.entry?.email },
						{
							key: "listed",
							header: t("import.listed"),
							cell: ({ operationId, listedName }) =>
								operationId && <Link to={href("/desk/growers/:operationId", { operationId })}>{listedName}</Link>,
						},
						{
							key: "choice",
							header: t("import.choice"),
							cell: (row) => <RowChoice row={row} at={rows.indexOf(row)} />,
						},
					]}
				/>
				<div className="mt-4">
					<Button kind="secondary" name="step" value="rows">
						{t("import.keepChoices")}
					</Button>
				</div>
			</Form>
		</>
	);
}

function RowChoice({ row, at }: { row: ImportRow; at: number }) {
	const { t } = useTranslation("growers");
	return (
		<>
			<input type="hidden" name={`row[${at}].number`} value={row.number} />
			<select
				name={`row[${at}].choice`}
				defaultValue={row.choice ?? "skip"}
				aria-label={t("import.choiceOf", { name: row.entry?.name })}
				className={inputClasses()}
			>
				{(["update", "skip", "create"] as const).map((choice) => (
					<option key={choice} value={choice}>
						{t(`import.one.${choice}`)}
					</option>
				))}
			</select>
		</>
	);
}
