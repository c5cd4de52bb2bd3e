import { useTranslation } from "react-i18next";
import { FieldFrame, fieldId, inputClasses } from "./field-frame.tsx";

export type PickableArea = {
	key: string;
	name: string;
	kind: "county" | "district" | "state" | "region";
	parentKey: string | null;
};
type AreaPickerProps = { areas: PickableArea[]; name: string; label: string; defaultValue?: string | null };

/** One area out of the network's tree: wide areas first, then counties and districts under what holds them. */
export function AreaPicker({ areas, name, label, defaultValue }: AreaPickerProps) {
	const { t } = useTranslation();
	const byKey = new Map(areas.map((area) => [area.key, area]));
	const wide = areas.filter(({ kind }) => kind === "region" || kind === "state");
	const groups = groupsOf(areas.filter(({ kind }) => kind === "district" || kind === "county"));
	return (
		<FieldFrame>
			<label htmlFor={fieldId(name)} className="font-bold">
				{label}
			</label>
			<select
				id={fieldId(name)}
				name={name}
				defaultValue={defaultValue ?? ""}
				className={`${inputClasses()} mt-1.5 block`}
			>
				{wide.map((area) => (
					<option key={area.key} value={area.key}>
						{area.name}
					</option>
				))}
				{[...groups].map(([group, members]) => (
					<optgroup key={group} label={groupLabel(members[0], byKey, t(`areaKind.plural.${members[0]?.kind}`))}>
						{members.map((area) => (
							<option key={area.key} value={area.key}>
								{area.name}
							</option>
						))}
					</optgroup>
				))}
			</select>
		</FieldFrame>
	);
}

function groupsOf(areas: PickableArea[]): Map<string, PickableArea[]> {
	const groups = new Map<string, PickableArea[]>();
	for (const area of areas) {
		const group = `${area.kind} ${area.parentKey ?? ""}`;
		groups.set(group, [...(groups.get(group) ?? []), area]);
	}
	return groups;
}

function groupLabel(member: PickableArea | undefined, byKey: Map<string, PickableArea>, kinds: string): string {
	const parent = byKey.get(member?.parentKey ?? "");
	return parent ? `${parent.name}: ${kinds}` : kinds;
}
