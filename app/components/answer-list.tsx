import { useTranslation } from "react-i18next";
import { Link } from "react-router";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf } from "#app/lib/format.ts";
import type { Words } from "#app/lib/words.ts";
import { DescriptionList } from "./description-list.tsx";
import { Section } from "./section.tsx";

type AnswerUnit = "lb" | "bu" | "ton" | "kg" | "trees" | "percent" | "count";
export type ShownAnswer =
	| { kind: "quantity"; value: number; unit: AnswerUnit }
	| { kind: "day"; day: string }
	| { kind: "words"; words: Words[] }
	| { kind: "text"; text: string }
	| { kind: "dont_know" | "refused" | "none" };
export type AnswerGroup = {
	stepKey: string;
	title: Words;
	/** Set where the group tells of one planting, which then names it. */
	planting: { cropKey: string; cultivar: string } | null;
	lines: { questionKey: string; text: Words; shown: ShownAnswer }[];
};

type AnswerListProps = {
	groups: AnswerGroup[];
	/** Where a group's answers are changed; without it they are only shown. */
	editHref?: (stepKey: string) => string;
	level?: 2 | 3;
};

/** What was answered, question by question, in the unit it was told in: for review, receipt and desk alike. */
export function AnswerList({ groups, editHref, level = 2 }: AnswerListProps) {
	const { t, i18n } = useTranslation();
	return groups.map((group) => {
		const name = group.planting ? plantingName(group.planting, t) : wordsIn(group.title, i18n.language);
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
			<Section key={group.stepKey} title={name} level={level} actions={edit}>
				<DescriptionList
					items={group.lines.map(({ text, shown }) => ({
						term: wordsIn(text, i18n.language),
						detail: <AnswerText shown={shown} />,
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

// A bushel and a short ton have other names where figures are told.
const formatUnit = { lb: "lb", kg: "kg", trees: "trees", percent: "percent", bu: "bushels", ton: "tons" } as const;

function AnswerText({ shown }: { shown: ShownAnswer }) {
	const { t, i18n } = useTranslation();
	const format = useFormat();
	switch (shown.kind) {
		case "quantity": {
			const decimals = decimalsOf(shown.value);
			if (shown.unit === "count") return format.number(shown.value, decimals);
			return format.quantity(shown.value, formatUnit[shown.unit], decimals);
		}
		case "day":
			return format.day(shown.day);
		case "words":
			return format.list(shown.words.map((words) => wordsIn(words, i18n.language)));
		case "text":
			return <span className="whitespace-pre-line">{shown.text}</span>;
		case "dont_know":
		case "refused":
			return <span className="text-quiet">{t(`answerKind.${shown.kind}`)}</span>;
		case "none":
			return <span className="text-quiet">{t("answerKind.not_provided")}</span>;
	}
}
