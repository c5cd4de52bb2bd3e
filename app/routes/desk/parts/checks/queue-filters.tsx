import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField, type Option } from "#app/components/choice-field.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { findingEnds, type FindingsQuery, openStates } from "#app/review/findings.schema.ts";
import { checkKinds } from "#app/review/odd-answers.ts";

type Area = { key: string; kind: string; name: string; stateFips: string | null };
type QueueFiltersProps = { query: FindingsQuery; crops: string[]; areas: Area[] };

/** What the queue is narrowed to, sent by GET so that a link keeps it. */
export function QueueFilters({ query, crops, areas }: QueueFiltersProps) {
	const { t } = useTranslation("checks");
	const nameArea = useAreaName();
	const states = query.show === "open" ? openStates : (["all", ...findingEnds] as const);
	const selects: [keyof FindingsQuery, string, Option[]][] = [
		[
			"kind",
			t("queue.kind"),
			[option("all", t("queue.anyKind")), ...checkKinds.map((kind) => option(kind, t(`kind.${kind}`)))],
		],
		[
			"crop",
			t("queue.crop"),
			[option("all", t("queue.anyCrop")), ...crops.map((crop) => option(crop, t(`common:crop.${crop}`)))],
		],
		[
			"area",
			t("queue.area"),
			[
				option("all", t("queue.anyArea")),
				...kinds.flatMap((kind) =>
					areas
						.filter((area) => area.kind === kind)
						.map((area) => ({
							value: area.key,
							label: nameArea({ areaKey: area.key, areaName: area.name, kind: area.kind }),
							group: t(`common:areaKind.${kind}`),
						})),
				),
			],
		],
		["state", t("queue.state"), states.map((state) => option(state, t(`queue.states.${state}`)))],
	];
	return (
		<Form method="get" className="no-print mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
			{selects.map(([name, legend, options]) => (
				<ChoiceField
					key={name}
					kind="select"
					name={name}
					legend={legend}
					defaultValue={String(query[name])}
					options={options}
				/>
			))}
			<input type="hidden" name="show" value={query.show} />
			<input type="hidden" name="sort" value={query.sort} />
			<input type="hidden" name="direction" value={query.direction} />
			<Button kind="secondary">{t("queue.narrow")}</Button>
		</Form>
	);
}

const option = (value: string, label: string): Option => ({ value, label });

/** All states, then all districts, then all counties. */
const kinds = ["state", "district", "county"];
