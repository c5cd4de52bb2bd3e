import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { Link } from "react-router";
import type { AnswerGroup, ShownAnswer, ShownUnit } from "#app/collect/answer-lines.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf, type Unit } from "#app/lib/format.ts";
import { DescriptionList } from "./description-list.tsx";
import { PhotoList } from "./photo-list.tsx";
import { Section } from "./section.tsx";
import { useStepTitle } from "./step-title.ts";

type AnswerListProps = {
	groups: AnswerGroup[];
	/** Where a group's answers are changed; without it they are only shown. */
	editHref?: (stepKey: string) => string;
	/** What leads to a group's answers where that is no link. */
	changeOf?: (group: { stepKey: string; name: string }) => ReactNode;
	/** Where a photo is; without it only how many there are is told. */
	photoHref?: (photoId: string) => string;
	level?: 2 | 3;
};

/** What was answered, question by question, in the unit it was told in: for review, receipt and desk alike. */
export function AnswerList({ groups, editHref, changeOf, photoHref, level = 2 }: AnswerListProps) {
	const { t, i18n } = useTranslation();
	const titleOf = useStepTitle();
	// Where a planting is asked about on several screens, its name alone does not tell them apart.
	const tables = new Set(groups.filter(({ planting }) => planting).map(({ title }) => title.en));
	return groups.map((group) => {
		const { planting, title } = group;
		const name = planting && tables.size < 2 ? plantingName(planting, t) : titleOf({ screen: { title }, planting });
		const edit = editHref && (
			<Link
				to={editHref(group.stepKey)}
				aria-label={t("answers.changeOf", { group: name })}
				className="inline-flex min-h-11 items-center"
			>
				{t("answers.change")}
			</Link>
		);
		return (
			<Section
				key={group.stepKey}
				title={name}
				level={level}
				actions={edit ?? changeOf?.({ stepKey: group.stepKey, name })}
			>
				<DescriptionList
					items={group.lines.map(({ text, shown }) => ({
						term: wordsIn(text, i18n.language),
						detail: <AnswerText shown={shown} photoHref={photoHref} />,
					}))}
				/>
			</Section>
		);
	});
}

function plantingName({ cropKey, cultivar }: { cropKey: string; cultivar: string }, t: (key: string) => string) {
	const crop = t(`crop.${cropKey}`);
	return cultivar ? `${crop}: ${cultivar}` : crop;
}

/** What the shared words call each unit of an answer. */
const formatUnit: Record<Exclude<ShownUnit, "count">, Unit> = {
	lb: "lb",
	kg: "kg",
	ton: "tons",
	bu: "bushels",
	half_bu: "half_bushels",
	peck: "pecks",
	dry_qt: "dry_quarts",
	crate: "crates",
	acre: "acres",
	ha: "hectares",
	fahrenheit: "fahrenheit",
	celsius: "celsius",
	ft: "row_feet",
	m: "row_meters",
	tree: "tree",
	bush: "bush",
	plants: "trees",
	percent: "percent",
};

/** One answer in words, in the unit it was told in. */
export function AnswerText({ shown, photoHref }: { shown: ShownAnswer } & Pick<AnswerListProps, "photoHref">) {
	const { t, i18n } = useTranslation();
	const format = useFormat();
	switch (shown.kind) {
		case "quantity": {
			const decimals = decimalsOf(shown.value);
			if (shown.unit === "count") return format.number(shown.value, decimals);
			const amount = format.quantity(shown.value, formatUnit[shown.unit], decimals);
			const { crateLb } = shown;
			if (crateLb === undefined) return amount;
			return t("answers.crates", { crates: amount, each: format.quantity(crateLb, "lb", decimalsOf(crateLb)) });
		}
		case "day":
			return format.day(shown.day);
		case "words":
			// Whole phrases, each with its capital letter, do not read as one sentence.
			return shown.words.map((words) => wordsIn(words, i18n.language)).join("; ");
		case "text":
			return <span className="whitespace-pre-line">{shown.text}</span>;
		case "photos":
			return <PhotoList photoIds={shown.photoIds} hrefOf={photoHref} />;
		case "dont_know":
		case "refused":
			return <span className="text-quiet">{t(`answerKind.${shown.kind}`)}</span>;
		case "none":
			return <span className="text-quiet">{t("answerKind.not_provided")}</span>;
	}
}
