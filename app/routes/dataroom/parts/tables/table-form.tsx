import { type FormEvent, useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import { Form, useSubmit } from "react-router";
import { Button } from "#app/components/button.tsx";
import { CheckField } from "#app/components/check-field.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { cropsOf, kindOrder, measuresOf } from "#app/publish/tables/catalogue.ts";
import { shownParts, statesOf, tableDimensions, tableLayouts } from "#app/publish/tables/selection.ts";
import { NamedAreas } from "./named-areas.tsx";
import { useTableLabels } from "./table-labels.ts";
import type { TablePage } from "./table-page.ts";

type FormProps = Pick<TablePage, "catalogue" | "selection" | "problems">;
type WholeFormProps = FormProps & Pick<TablePage, "table"> & { busy: boolean };

/**
 * Every choice in one form sent by GET, so that its address is the table's. With scripts it is sent by itself a moment after
 * each change; what it comes to is said in its last line, which stays in sight.
 */
export function TableForm({ table, busy, ...props }: WholeFormProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const told =
		table && t("tables.count", { rows: format.number(table.rowCount), cells: format.number(table.cellCount) });
	const said = busy ? t("tables.loading") : (told ?? t("tables.noTable"));
	const submit = useSubmit();
	const timer = useRef<ReturnType<typeof setTimeout>>(undefined);
	useEffect(() => () => clearTimeout(timer.current), []);
	const onChange = ({ currentTarget: form }: FormEvent<HTMLFormElement>) => {
		clearTimeout(timer.current);
		timer.current = setTimeout(() => void submit(form, { replace: true, preventScrollReset: true }), 300);
	};
	return (
		<Form method="get" noValidate preventScrollReset onChange={onChange} className="no-print border-y border-rule pt-5">
			<div className="grid gap-x-8 sm:grid-cols-2 lg:grid-cols-4">
				<WhatChoices {...props} />
				<AreaChoices {...props} />
				<LayoutChoices {...props} />
			</div>
			<div className="sticky bottom-0 flex flex-wrap items-center gap-x-5 gap-y-2 border-t border-rule bg-paper py-3">
				<Button>{t("tables.show")}</Button>
				<output className="text-quiet">{said}</output>
				<a href="#table" className="inline-flex min-h-11 items-center">
					{t("tables.toTable")}
				</a>
			</div>
		</Form>
	);
}

const problemIn = ({ problems }: FormProps, field: string) => problems.find((problem) => problem.field === field);

function WhatChoices(props: FormProps) {
	const { catalogue, selection } = props;
	const { t, i18n } = useTranslation("dataroom");
	const labels = useTableLabels();
	const numbers = catalogue.releases.map(({ number }) => number);
	const standing = catalogue.releases.filter(({ withdrawn }) => !withdrawn);
	return (
		<>
			<div className="min-w-0">
				<ChoiceField
					kind="checkbox"
					name="release"
					legend={labels.release}
					options={standing.map(({ number, season, title, replacedBy }) => ({
						value: `${number}`,
						label: t("public:map.form.release", { season, number, title: wordsIn(title, i18n.language) }),
						help: replacedBy === null ? undefined : t("tables.replacedBy", { number: replacedBy }),
					}))}
					defaultValue={selection.release.map(String)}
					problem={problemIn(props, "release")}
				/>
				<CheckField name="revisions" label={t("tables.revisions")} defaultChecked={selection.revisions} />
			</div>
			<ChoiceField
				kind="checkbox"
				name="measure"
				legend={labels.measure}
				options={[...measuresOf(catalogue, numbers).values()].map(({ key, label }) => ({
					value: key,
					label: wordsIn(label, i18n.language),
				}))}
				defaultValue={selection.measure}
				problem={problemIn(props, "measure")}
			/>
			<ChoiceField
				kind="checkbox"
				name="crop"
				legend={labels.crop}
				options={cropsOf(catalogue, numbers).map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }))}
				defaultValue={selection.crop}
				problem={problemIn(props, "crop")}
			/>
		</>
	);
}

function AreaChoices(props: FormProps) {
	const { catalogue, selection } = props;
	const { t } = useTranslation("dataroom");
	const labels = useTableLabels();
	const kinds = kindOrder.filter((kind) => catalogue.areas.some((area) => area.kind === kind));
	return (
		<>
			<div className="min-w-0">
				<ChoiceField
					kind="checkbox"
					name="kind"
					legend={labels.kind}
					help={t("tables.kindHelp")}
					options={kinds.map((kind) => ({ value: kind, label: t(`common:areaKind.plural.${kind}`) }))}
					defaultValue={selection.kind}
					problem={problemIn(props, "kind")}
				/>
			</div>
			<ChoiceField
				kind="checkbox"
				name="state"
				legend={labels.state}
				help={t("tables.stateHelp")}
				optional
				options={statesOf(catalogue).map((state) => ({ value: state, label: t(`common:state.${state}`) }))}
				defaultValue={selection.state}
				problem={problemIn(props, "state")}
			/>
			<div className="min-w-0">
				<TextField
					name="q"
					type="search"
					size="full"
					label={t("tables.find")}
					help={t("tables.findHelp")}
					maxLength={200}
					defaultValue={selection.q}
				/>
				<NamedAreas catalogue={catalogue} selection={selection} problem={problemIn(props, "area")} />
			</div>
		</>
	);
}

function LayoutChoices(props: FormProps) {
	const { selection } = props;
	const { t } = useTranslation("dataroom");
	const labels = useTableLabels();
	return (
		<>
			<div className="min-w-0">
				<ChoiceField
					kind="radio"
					name="layout"
					legend={labels.layout}
					options={tableLayouts.map((one) => ({
						value: one,
						label: t(`tables.layout.${one}.name`),
						help: t(`tables.layout.${one}.about`),
					}))}
					defaultValue={selection.layout}
					problem={problemIn(props, "layout")}
				/>
			</div>
			<ChoiceField
				kind="checkbox"
				name="columns"
				legend={labels.columns}
				help={t("tables.columnsHelp")}
				options={tableDimensions.map((one) => ({ value: one, label: t(`tables.dimension.${one}`) }))}
				defaultValue={selection.columns}
				problem={problemIn(props, "columns")}
			/>
			<ChoiceField
				kind="checkbox"
				name="show"
				legend={labels.show}
				optional
				options={shownParts.map((one) => ({ value: one, label: t(`tables.part.${one}`) }))}
				defaultValue={selection.show}
				problem={problemIn(props, "show")}
			/>
		</>
	);
}
