import { useTranslation } from "react-i18next";
import { useLocation } from "react-router";
import type { Difference } from "#app/collect/answer-lines.ts";
import { AnswerText } from "#app/components/answer-list.tsx";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";

/** Two devices changed one screen: what each says, and a button for either. Stands in the screen's form. */
export function ChangedElsewhere({ lines }: { lines: Difference[] }) {
	const { t, i18n } = useTranslation("grower");
	const { pathname, search } = useLocation();
	return (
		<div role="alert">
			<Notice tone="attention" title={t("elsewhere.title")}>
				<p>{t("elsewhere.body")}</p>
				<DescriptionList
					items={lines.map(({ text, mine, theirs }) => ({
						term: wordsIn(text, i18n.language),
						detail: (
							<>
								<span className="block">
									{t("elsewhere.here")} <AnswerText shown={mine} />
								</span>
								<span className="block">
									{t("elsewhere.there")} <AnswerText shown={theirs} />
								</span>
							</>
						),
					}))}
				/>
				<div className="mt-4 flex flex-wrap gap-3">
					<Button>{t("elsewhere.mine")}</Button>
					<ButtonLink kind="secondary" to={pathname + search} reloadDocument data-take-theirs="">
						{t("elsewhere.theirs")}
					</ButtonLink>
				</div>
			</Notice>
		</div>
	);
}
