import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import { buttonClasses, ButtonLink } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Paging } from "#app/components/paging.tsx";
import { Section } from "#app/components/section.tsx";
import type { ImportRow, rowFilters } from "#app/directory/import/import-rows.server.ts";
import type { Import } from "#app/directory/import/imports.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { ImportStatusBadge } from "./import-status.tsx";
import { RowTable } from "./row-table.tsx";

type Show = (typeof rowFilters)[number];
type ImportPreviewProps = {
	file: Import;
	rows: { rows: ImportRow[]; total: number; page: number; pageCount: number } | null;
	show: Show;
};

/** What a file would change, row by row, before it does; afterwards what it changed. */
export function ImportPreview({ file, rows, show }: ImportPreviewProps) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	const { importId, counts, status } = file;
	if (!counts) return null;
	const ofShow: Record<Show, number> = {
		bad: counts.bad,
		matched: counts.matched,
		new: counts.operations - counts.matched,
	};
	return (
		<>
			<Counts file={file} />
			{counts.bad > 0 && (
				<Notice tone="attention" title={t("import.badTitle", { count: counts.bad, value: format.number(counts.bad) })}>
					<p className="mb-3">{t(status === "checked" ? "import.badBody" : "import.badAfter")}</p>
					<a
						href={href("/desk/growers/import/:importId/to-mend.csv", { importId })}
						className={buttonClasses({ kind: "secondary" })}
					>
						{t("import.badFile")}
					</a>
				</Notice>
			)}
			{status === "checked" && <ImportButton file={file} />}
			{status === "imported" && <UndoButton />}
			{rows && (
				<Section title={t("import.rowsTitle")}>
					<nav aria-label={t("import.rowsTitle")} className="mb-4">
						<ul className="flex flex-wrap gap-x-6">
							{(Object.keys(ofShow) as Show[]).map((one) => (
								<li key={one}>
									<Link
										to={`?show=${one}`}
										preventScrollReset
										aria-current={one === show ? "true" : undefined}
										className="inline-flex min-h-11 items-center aria-[current=true]:font-bold"
									>
										<ShowName show={one} count={ofShow[one]} />
									</Link>
								</li>
							))}
						</ul>
					</nav>
					<RowTable rows={rows.rows} show={show} header={file.header ?? []} />
					<Paging page={rows.page} pageCount={rows.pageCount} total={rows.total} />
				</Section>
			)}
		</>
	);
}

function ShowName({ show, count }: { show: Show; count: number }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return t(`import.show.${show}`, { value: format.number(count) });
}

function Counts({ file }: { file: Import }) {
	const { counts, status, personName, importedAt, createdAt } = file;
	const { t } = useTranslation("growers");
	const format = useFormat();
	if (!counts) return null;
	const told = {
		rows: counts.rows,
		operations: counts.operations,
		matched: counts.matched,
		plantings: counts.plantings,
		bad: counts.bad,
	};
	return (
		<DescriptionList
			items={[
				{ term: t("import.log.status"), detail: <ImportStatusBadge file={file} /> },
				{ term: t("import.log.who"), detail: personName },
				{ term: t("import.log.when"), detail: format.moment(importedAt ?? createdAt) },
				...(Object.keys(told) as (keyof typeof told)[])
					.filter((key) => status === "checked" || key !== "matched")
					.map((key) => ({ term: t(`import.count.${key}`), detail: format.number(told[key]) })),
			]}
		/>
	);
}

function ImportButton({ file: { counts } }: { file: Import }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	if (!counts) return null;
	const change = (
		<ButtonLink to="?columns=1" kind="quiet">
			{t("import.changeColumns")}
		</ButtonLink>
	);
	if (counts.operations === 0)
		return (
			<>
				<p className="my-4">{t("import.nothingGood")}</p>
				{change}
			</>
		);
	const words = { count: counts.operations, value: format.number(counts.operations) };
	return (
		<Form method="post" className="my-6 flex flex-wrap gap-3">
			<Confirm
				trigger={t("import.go", words)}
				title={t("import.goAsk", words)}
				body={t(counts.bad > 0 ? "import.goBodyBad" : "import.goBody")}
				confirmLabel={t("import.goConfirm")}
				name="step"
				value="import"
			/>
			{change}
		</Form>
	);
}

function UndoButton() {
	const { t } = useTranslation("growers");
	return (
		<Form method="post" className="my-6">
			<Confirm
				trigger={t("import.undo")}
				title={t("import.undoAsk")}
				body={t("import.undoBody")}
				confirmLabel={t("import.undoConfirm")}
				name="step"
				value="undo"
				danger
			/>
		</Form>
	);
}
