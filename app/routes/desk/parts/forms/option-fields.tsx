import { useTranslation } from "react-i18next";
import { mostOptions, type QuestionFields } from "#app/collect/editing/question.schema.ts";
import { Button } from "#app/components/button.tsx";
import { CheckField } from "#app/components/check-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { Problem } from "#app/lib/parse-form.ts";
import { TextPair } from "./text-pair.tsx";

type OptionFieldsProps = {
	type: "choice" | "several" | "rating";
	value: QuestionFields["options"];
	problems?: Problem[];
	isHeld: boolean;
};

const blank = { en: "", es: "", alone: false, key: undefined, score: undefined };

/** The answers to choose from, with two rows more than there are, up to as many as there may be; a row that is emptied in both languages goes. */
export function OptionFields({ type, value, problems, isHeld }: OptionFieldsProps) {
	const { t } = useTranslation("forms");
	const rows = [...value, blank, blank].slice(0, mostOptions);
	return (
		<fieldset className="mb-6">
			<legend className="font-bold">{t("option.title")}</legend>
			<p className="mb-3 text-quiet">{isHeld ? t("option.helpHeld") : t("option.help")}</p>
			<ol className="list-none">
				{rows.map((option, index) => (
					<li key={option.key ?? `new-${index}`} id={`option-${index}`} className="mb-2 border-l-2 border-line pl-4">
						{option.key && <input type="hidden" name={`options[${index}].key`} value={option.key} />}
						<TextPair
							name={`options[${index}]`}
							label={t("option.text", { number: index + 1 })}
							value={{ en: option.en, es: option.es }}
							problems={problems}
							optional={option.key === undefined}
						/>
						<div className="-mt-4 mb-4 flex flex-wrap items-end gap-x-6">
							{type === "several" && (
								<CheckField name={`options[${index}].alone`} label={t("option.alone")} defaultChecked={option.alone} />
							)}
							{type === "rating" && (
								<TextField
									name={`options[${index}].score`}
									label={t("option.score", { number: index + 1 })}
									defaultValue={option.score ?? ""}
									problem={problems?.find(({ field }) => field === `options[${index}].score`)}
									inputMode="decimal"
									size="short"
									maxLength={60}
									optional
								/>
							)}
							{option.key && index > 0 && (
								<div className="mb-6">
									<Button
										id={`option-up-${index}`}
										kind="quiet"
										size="small"
										name="intent"
										value={`option_up:${index}`}
										aria-label={t("option.upOf", { number: index + 1 })}
									>
										{t("move.up")}
									</Button>
								</div>
							)}
						</div>
					</li>
				))}
			</ol>
		</fieldset>
	);
}
