import { useTranslation } from "react-i18next";
import { useNavigation } from "react-router";
import { questionsUpTo } from "#app/collect/editing/condition-lines.ts";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import type { ScreenFields as Fields } from "#app/collect/editing/screen.schema.ts";
import type { Screen } from "#app/collect/form.ts";
import { Button } from "#app/components/button.tsx";
import { CheckField } from "#app/components/check-field.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import type { Problem } from "#app/lib/parse-form.ts";
import { AskedField } from "./add-parts.tsx";
import { ConditionFields, useConditionLabels } from "./condition-fields.tsx";
import { TextPair, usePairLabels } from "./text-pair.tsx";

type ScreenFieldsProps = {
	draft: FormDraft;
	screen: Screen;
	value: Fields;
	problems?: Problem[];
	isHeld: boolean;
};

/** What a screen says of itself, and of whom it is asked. */
export function ScreenFields({ draft, screen, value, problems, isHeld }: ScreenFieldsProps) {
	const { t } = useTranslation("forms");
	const percents = screen.questions.filter(({ type }) => type === "percent").length;
	return (
		<>
			<TextPair name="title" label={t("screen.title")} value={value.title} problems={problems} />
			<TextPair
				name="help"
				label={t("screen.help")}
				value={value.help ?? { en: "", es: "" }}
				problems={problems}
				rows={2}
				optional
			/>
			{isHeld ? (
				<>
					<input type="hidden" name="asked" value={screen.perPlanting ? "planting" : "once"} />
					<p className="mb-6 text-quiet">{t("screen.askedHeld")}</p>
				</>
			) : (
				<AskedField value={value.asked} help={t("screen.asked.help")} />
			)}
			{percents > 1 && <CheckField name="sum" label={t("screen.sum")} defaultChecked={value.sum} />}
			<Section title={t("condition.screenTitle")} level={3}>
				<ConditionFields
					name="condition"
					value={value.condition}
					kept={screen.condition}
					draft={draft}
					offered={questionsUpTo(draft, screen, false)}
					problems={problems}
					asksWhenUnsure
				/>
			</Section>
		</>
	);
}

export function ScreenActions({ isHeld, questions }: { isHeld: boolean; questions: number }) {
	const { t } = useTranslation("forms");
	const busy = useNavigation().state === "submitting";
	return (
		<>
			<div className="flex flex-wrap gap-3">
				<Button name="intent" value="save" busy={busy}>
					{t("screen.save")}
				</Button>
				<Button id="move-up" kind="secondary" name="intent" value="up">
					{t("move.up")}
				</Button>
				<Button id="move-down" kind="secondary" name="intent" value="down">
					{t("move.down")}
				</Button>
			</div>
			<div className="mt-4">
				{isHeld ? (
					<p className="text-quiet">{t("screen.held")}</p>
				) : (
					<Confirm
						trigger={t("screen.remove")}
						title={t("screen.removeAsk")}
						body={t("screen.removeBody", { count: questions })}
						confirmLabel={t("screen.remove")}
						name="intent"
						value="remove"
						danger
					/>
				)}
			</div>
		</>
	);
}

export function useScreenLabels(): Record<string, string> {
	const { t } = useTranslation("forms");
	const conditions = useConditionLabels();
	const inBoth = usePairLabels();
	return { ...inBoth({ title: t("screen.title"), help: t("screen.help") }), ...conditions("condition") };
}
