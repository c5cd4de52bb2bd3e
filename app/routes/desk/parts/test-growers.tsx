import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { listTestGrowers } from "#app/collect/rehearsal.server.ts";
import { Button } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { dispositionTones } from "./frame-table.tsx";

type TestGrower = Awaited<ReturnType<typeof listTestGrowers>>[number];

/** The invented growers of a rehearsal, each with the button that tells the way to its pages. */
export function TestGrowers({ growers }: { growers: TestGrower[] }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	return (
		<DataTable
			caption={t("rehearsal.growers")}
			captionHidden
			rows={growers}
			rowKey={(row) => row.operationId}
			columns={[
				{ key: "name", header: t("growers.name"), cell: (row) => row.name },
				{
					key: "county",
					header: t("common:areaKind.county"),
					cell: (row) => t("growers.county", { county: row.countyName, state: row.statePostal }),
				},
				{ key: "language", header: t("response.language"), cell: (row) => t(`common:language.${row.language}`) },
				{
					key: "crops",
					header: t("grower.plantings"),
					cell: (row) =>
						format.list(
							row.crops.map(({ cropKey, trees }) =>
								t("growers:planting.frozenCrop", {
									crop: t(`common:crop.${cropKey}`),
									trees: format.quantity(trees, "trees"),
								}),
							),
						),
				},
				{
					key: "disposition",
					header: t("responses.disposition"),
					cell: (row) => (
						<StatusBadge tone={dispositionTones[row.disposition as keyof typeof dispositionTones]}>
							{t(`common:disposition.${row.disposition}`)}
						</StatusBadge>
					),
				},
				{
					key: "answer",
					header: t("rehearsal.answer"),
					cell: (row) => (
						<Form method="post">
							<input type="hidden" name="operationId" value={row.operationId} />
							<Button
								kind="secondary"
								size="small"
								name="step"
								value="link"
								aria-label={t("rehearsal.answerAsOf", { name: row.name })}
							>
								{t("rehearsal.answerAs")}
							</Button>
						</Form>
					),
				},
			]}
			empty={null}
		/>
	);
}
