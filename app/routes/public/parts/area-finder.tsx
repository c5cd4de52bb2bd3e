import { type FormEvent, useEffect, useId, useMemo, useRef } from "react";
import { useTranslation } from "react-i18next";
import { Form, Link, useSearchParams } from "react-router";
import { Button } from "#app/components/button.tsx";
import { describedBy, FieldFrame, fieldId, FieldProblem, inputClasses } from "#app/components/field-frame.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { useHydrated } from "#app/components/use-hydrated.ts";
import { areasNamed } from "#app/publish/areas-named.ts";
import { chosenHere } from "./map-area-table.tsx";
import type { AreaSearch, FoundArea } from "./search-area.ts";

type AreaFinderProps = {
	kind: string;
	areas: FoundArea[];
	chosen: string | null;
	/** What a name that was sent has led to. */
	search: AreaSearch | null;
	onChoose: (areaKey: string | null) => void;
};

const name = "find";

/** Chooses an area of the map by its name: at once where a whole name stands in the box, and by the server for any other. */
export function AreaFinder({ kind, areas, chosen, search, onChoose }: AreaFinderProps) {
	const { t } = useTranslation("public");
	const areaName = useAreaName();
	const [address] = useSearchParams();
	const listId = useId();
	// Thousands of names, which nobody can use before scripts run.
	const hydrated = useHydrated();
	const names = useMemo(
		() => new Map(hydrated ? areas.map((area) => [areaName(area), area.areaKey]) : []),
		// Names change with the areas and with nothing else on this page.
		// oxlint-disable-next-line react-hooks/exhaustive-deps
		[hydrated, areas],
	);
	const area = areas.find(({ areaKey }) => areaKey === chosen);
	const shown = area ? areaName(area) : (search?.typed ?? "");
	const box = useShown(shown);
	const typing = ({ currentTarget: { value } }: FormEvent<HTMLInputElement>) => {
		const areaKey = value === "" ? null : names.get(value);
		if (areaKey !== undefined && areaKey !== chosen) onChoose(areaKey);
	};
	/** Who has scripts needs the server only to say that a name is nobody's, or that of several. */
	const send = (event: FormEvent<HTMLFormElement>) => {
		const typed = box.current?.value.trim() ?? "";
		const found = areasNamed(areas, typed, areaName);
		if (found.length !== 1 && typed !== "") return;
		event.preventDefault();
		if (found[0] && box.current) box.current.value = areaName(found[0]);
		onChoose(found[0]?.areaKey ?? null);
	};
	const problem = search && !area && search.areas.length === 0 ? problemOf(search) : undefined;
	const label = t(`map.find.${kind}`);
	return (
		<search>
			<Form method="get" preventScrollReset onSubmit={send} className="no-print mb-6">
				{/* What was chosen before gives way, so that a name which leads nowhere is told. */}
				{[...address].map(
					([key, value]) =>
						key !== name && key !== "area" && <input key={key} type="hidden" name={key} value={value} />,
				)}
				<FieldFrame problem={problem}>
					<label htmlFor={fieldId(name)} className="font-bold">
						{label}
					</label>
					<div aria-live="polite">
						<FieldProblem name={name} label={label} problem={problem} />
					</div>
					<div className="mt-1.5 flex flex-wrap items-center gap-3">
						<input
							ref={box}
							type="search"
							id={fieldId(name)}
							name={name}
							list={listId}
							defaultValue={shown}
							maxLength={200}
							onInput={typing}
							aria-describedby={describedBy(name, null, problem)}
							aria-invalid={problem ? true : undefined}
							className={`${inputClasses(problem)} w-full sm:w-80`}
						/>
						<datalist id={listId}>
							{[...names.keys()].map((each) => (
								<option key={each}>{each}</option>
							))}
						</datalist>
						<Button kind="secondary">{t("map.find.submit")}</Button>
					</div>
				</FieldFrame>
				{search && !area && search.areas.length > 0 && <Several search={search} onChoose={onChoose} />}
			</Form>
		</search>
	);
}

const problemOf = ({ typed }: AreaSearch) => ({ field: name, code: "area_unknown", detail: { typed } });

/** What the map shows stands in the box too, unless somebody is typing there. */
function useShown(shown: string) {
	const box = useRef<HTMLInputElement>(null);
	useEffect(() => {
		if (box.current && box.current !== document.activeElement) box.current.value = shown;
	}, [shown]);
	return box;
}

function Several({ search, onChoose }: Pick<AreaFinderProps, "onChoose"> & { search: AreaSearch }) {
	const { typed, areas, more } = search;
	const { t } = useTranslation("public");
	const areaName = useAreaName();
	const [address] = useSearchParams();
	const to = (areaKey: string) => {
		const next = new URLSearchParams(address);
		next.delete(name);
		next.set("area", areaKey);
		return `?${next}`;
	};
	return (
		<div aria-live="polite" className="-mt-3">
			<p>{t("map.find.several", { typed })}</p>
			<ul className="mt-1 flex list-none flex-wrap gap-x-6">
				{areas.map((area) => (
					<li key={area.areaKey}>
						<Link
							to={to(area.areaKey)}
							onClick={(event) => chosenHere(event) && onChoose(area.areaKey)}
							className="inline-flex min-h-11 items-center"
						>
							{areaName(area)}
						</Link>
					</li>
				))}
			</ul>
			{more && <p className="text-quiet">{t("map.find.more")}</p>}
		</div>
	);
}
