import { useRef, useState } from "react";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { fieldId } from "#app/components/field-frame.tsx";
import { PinMap } from "#app/components/map/pin-map.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useHydrated } from "#app/components/use-hydrated.ts";
import type { CountyChoice } from "#app/directory/own-place.server.ts";
import { countyName } from "#app/i18n/county-name.ts";
import type { Pin } from "#app/lib/geography/pin.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { readPin } from "./place-form.ts";

type PartProps = {
	operation: { countyFips: string };
	pin: Pin | null;
	counties: CountyChoice[];
	countiesAddress: string | null;
	values?: FormValues;
	problems?: Problem[];
};

/** As text, since degrees are read off a map and typed in again elsewhere. */
export function degreesOf({ latitude, longitude }: Pin) {
	return { latitude: String(latitude), longitude: String(longitude) };
}

/** The pin, by map or by two boxes: each follows the other. */
export function PinPart({ pin, counties, countiesAddress: address, values, problems }: PartProps) {
	const { t } = useTranslation("orchard");
	const hydrated = useHydrated();
	const form = useRef<HTMLFormElement>(null);
	const sent = values?.step === "pin" ? values : undefined;
	const text = (name: "latitude" | "longitude") =>
		sent ? (typeof sent[name] === "string" ? sent[name] : "") : pin ? degreesOf(pin)[name] : "";
	const [shown, setShown] = useState(() => readPin(text("latitude"), text("longitude")));
	const box = (name: "latitude" | "longitude") =>
		form.current?.querySelector<HTMLInputElement>(`#${fieldId(name)}`) ?? null;
	const fill = (told: Pin) => {
		for (const name of ["latitude", "longitude"] as const) {
			const input = box(name);
			if (input) input.value = String(told[name]);
		}
		setShown(told);
	};
	const told = (fips: string | null) => {
		const county = counties.find(({ countyFips }) => countyFips === fips);
		if (!county) return t("place.pinOutside");
		return t("place.pinIn", { county: countyName(t, county) });
	};
	return (
		<Section title={t("place.pinTitle")}>
			<p className="mb-4">{t("place.pinLead")}</p>
			<Form
				ref={form}
				method="post"
				noValidate
				onInput={() => setShown(readPin(box("latitude")?.value ?? "", box("longitude")?.value ?? ""))}
			>
				{hydrated && address && (
					<PinMap
						countiesAddress={address}
						label={t("place.map")}
						hint={t("place.mapHint")}
						pin={shown}
						onPin={fill}
						told={told}
					/>
				)}
				{(["latitude", "longitude"] as const).map((name) => (
					<TextField
						key={name}
						name={name}
						label={t(`place.${name}`)}
						help={t(`place.help.${name}`)}
						defaultValue={text(name)}
						problem={problems?.find(({ field }) => field === name)}
						inputMode="text"
						autoComplete="off"
						maxLength={60}
					/>
				))}
				<Button name="step" value="pin">
					{t("place.savePin")}
				</Button>
			</Form>
		</Section>
	);
}

/** The county alone, for who would rather not tell the place. */
export function CountyPart({ operation, counties, values, problems }: PartProps) {
	const { t } = useTranslation("orchard");
	const sent = values?.countyFips;
	return (
		<Section title={t("place.countyTitle")}>
			<p className="mb-4">{t("place.countyLead")}</p>
			<Form method="post" noValidate>
				<ChoiceField
					kind="select"
					name="countyFips"
					legend={t("place.county")}
					options={counties.map(({ countyFips, stateFips, name }) => ({
						value: countyFips,
						label: name,
						group: t(`common:state.${stateFips}`),
					}))}
					defaultValue={typeof sent === "string" ? sent : operation.countyFips}
					problem={problems?.find(({ field }) => field === "countyFips")}
				/>
				<Button kind="secondary" name="step" value="county">
					{t("place.saveCounty")}
				</Button>
			</Form>
		</Section>
	);
}
