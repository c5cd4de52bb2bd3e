import { useEffect, useRef } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import type { FormValues } from "#app/lib/parse-form.ts";

type MoveNoticeProps = {
	from: { countyName: string; stateFips: string };
	to: { name: string; stateFips: string };
	/** What was sent, to be sent again when it is confirmed. */
	values: FormValues;
};

/** Which county was found and what follows from moving there, before anything is saved. Takes the focus when it appears. */
export function MoveNotice({ from, to, values }: MoveNoticeProps) {
	const { t } = useTranslation("orchard");
	const box = useRef<HTMLDivElement>(null);
	useEffect(() => box.current?.focus(), []);
	const stateOf = ({ stateFips }: { stateFips: string }) => t(`common:state.${stateFips}`);
	const before = t("home.place", { county: from.countyName, state: stateOf(from) });
	const after = t("home.place", { county: to.name, state: stateOf(to) });
	const repeated = ["latitude", "longitude", "countyFips"].flatMap((name) => {
		const value = values[name];
		return typeof value === "string" ? [{ name, value }] : [];
	});
	return (
		<div ref={box} tabIndex={-1} role="alert">
			<Notice tone="attention" title={t("place.found", { county: after })}>
				<ul className="list-disc space-y-1 pl-6">
					<li>{t("place.follows.figures", { county: after })}</li>
					{from.stateFips !== to.stateFips && (
						<li>{t("place.follows.associates", { to: stateOf(to), from: stateOf(from) })}</li>
					)}
					<li>{t("place.follows.surveys", { county: before })}</li>
				</ul>
				<Form method="post" className="mt-4">
					{repeated.map((field) => (
						<input key={field.name} type="hidden" {...field} />
					))}
					<input type="hidden" name="confirmed" value="yes" />
					<Button name="step" value={String(values.step)}>
						{t("place.move", { county: after })}
					</Button>
				</Form>
			</Notice>
		</div>
	);
}
