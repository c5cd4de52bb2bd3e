import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/api";
import { apiLimits } from "#app/auth/api-limits.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { getT } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { env } from "#app/lib/env.server.ts";
import { mostRows, mostValues } from "#app/publish/api/limits.ts";
import { problemStatus } from "#app/publish/api/problem.ts";
import { observationStatuses } from "#app/publish/data-file.ts";
import { findLatestRelease, listMeasures } from "#app/publish/releases.server.ts";
import { TryIt } from "./parts/api/try-it.tsx";
import { type ToldOperation, type ToldParameter, toldOperations } from "./parts/api/told-operations.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const latest = await findLatestRelease();
	const [measure] = latest ? await listMeasures(latest.releaseId) : [];
	return {
		root: `${env().BASE_URL}/api/v1`,
		operations: toldOperations(getT(context, "dataroom")),
		problems: Object.entries(problemStatus).map(([code, status]) => ({ code, status })),
		statuses: [...observationStatuses],
		limits: { ...apiLimits, mostRows, mostValues },
		// What the fields to try are filled with at first: something that is there.
		filled: { release: String(latest?.number ?? 1), file: "cells.csv", measure: measure?.key ?? "", limit: "5" },
	};
}

export default function Api({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("dataroom");
	return (
		<Page title={t("api.title")} lead={t("api.lead")}>
			<HowItWorks {...loaderData} />
			<nav aria-label={t("api.page.contents")} className="no-print mt-8">
				<ul className="columns-1 sm:columns-2">
					{loaderData.operations.map(({ id }) => (
						<li key={id}>
							<a href={`#${id}`} className="inline-flex min-h-9 items-center">
								{t(`api.operation.${id}.name`)}
							</a>
						</li>
					))}
				</ul>
			</nav>
			{loaderData.operations.map((operation) => (
				<OperationSection key={operation.id} operation={operation} {...loaderData} />
			))}
			<Problems {...loaderData} />
		</Page>
	);
}

type Told = Route.ComponentProps["loaderData"];

function HowItWorks({ root, limits, statuses }: Told) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const numbers = {
		open: format.number(limits.open),
		key: format.number(limits.key),
		rows: format.number(limits.mostRows),
		values: format.number(limits.mostValues),
	};
	return (
		<>
			<ul className="max-w-prose list-disc space-y-2 pl-6">
				{(["format", "pages", "filters", "limit", "copies", "problems"] as const).map((key) => (
					<li key={key}>{t(`api.page.how.${key}`, numbers)}</li>
				))}
				<li>
					<Link to={href("/dataroom/keys")}>{t("api.page.keys")}</Link>
				</li>
				<li>
					<a href={`${root}/openapi.json`}>{t("api.page.openapi")}</a>
				</li>
			</ul>
			<div className="mt-6">
				<DataTable
					caption={t("api.page.statuses")}
					rows={statuses}
					rowKey={(status) => status}
					columns={[
						{ key: "code", header: t("api.page.code_"), cell: (status) => <code>{status}</code> },
						{ key: "name", header: t("api.page.name"), cell: (status) => t(`status.${status}.name`) },
						{ key: "about", header: t("api.page.about"), cell: (status) => t(`status.${status}.about`) },
					]}
				/>
			</div>
		</>
	);
}

function OperationSection({ operation, root, filled }: Told & { operation: ToldOperation }) {
	const { t } = useTranslation("dataroom");
	const { id, line, types, fields, parameters } = operation;
	return (
		<Section title={t(`api.operation.${id}.name`)} id={id}>
			<p className="wrap-anywhere">
				<code className="font-bold">{line}</code>
			</p>
			<p className="mt-2 max-w-prose">{t(`api.operation.${id}.about`)}</p>
			{types.length > 0 && (
				<p className="mt-2 text-sm text-quiet">{t("api.page.types", { types: types.join(", ") })}</p>
			)}
			{parameters.length > 0 && <Parameters id={id} parameters={parameters} />}
			{fields.length > 0 && (
				<p className="mt-3 max-w-prose text-sm wrap-anywhere">{t("api.page.fields", { fields: fields.join(", ") })}</p>
			)}
			<TryIt operation={operation} root={root} filled={filled} />
		</Section>
	);
}

function Parameters({ id, parameters }: { id: string; parameters: ToldParameter[] }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const canBe = ({ choices, range, example }: ToldParameter) => {
		if (choices.length > 0) return choices.join(", ");
		if (range) return t("api.page.range", { least: format.number(range.least), most: format.number(range.most) });
		return example ? t("api.page.example", { example }) : "";
	};
	return (
		<div className="mt-4">
			<DataTable
				caption={t("api.page.parametersOf", { name: t(`api.operation.${id}.name`) })}
				rows={parameters}
				rowKey={({ name }) => name}
				columns={[
					{ key: "name", header: t("api.page.parameter"), cell: ({ name }) => <code>{name}</code> },
					{ key: "about", header: t("api.page.about"), cell: ({ about }) => about },
					{ key: "values", header: t("api.page.values"), cell: canBe },
					{
						key: "several",
						header: t("api.page.howMany"),
						cell: ({ several, in: where }) =>
							t(several ? "api.page.several" : where === "path" ? "api.page.needed" : "api.page.one"),
					},
				]}
			/>
		</div>
	);
}

function Problems({ problems }: Told) {
	const { t } = useTranslation("dataroom");
	return (
		<Section title={t("api.page.problemsTitle")}>
			<DataTable
				caption={t("api.page.problemsCaption")}
				rows={problems}
				rowKey={({ code }) => code}
				columns={[
					{ key: "status", header: t("api.page.status"), cell: ({ status }) => status },
					{ key: "code", header: t("api.page.code_"), cell: ({ code }) => <code id={code}>{code}</code> },
					{
						key: "means",
						header: t("api.page.about"),
						cell: ({ code }) => (
							<>
								{t(`api.problem.${code}.title`)}. {t(`api.problem.${code}.detail`)}
							</>
						),
					},
				]}
			/>
		</Section>
	);
}
