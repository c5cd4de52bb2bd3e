import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { CheckField } from "#app/components/check-field.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { NotDone } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type LookAlikesProps = {
	likely: { operationId: string; name: string; contactName: string; countyName: string; statePostal: string }[];
	owners: { ownerId: string; name: string; operations: string[] }[];
	ownerName: string;
};

/** Who is known already and looks like the one being written down; a tick says that it was looked at. */
export function LookAlikes({ likely, owners, ownerName }: LookAlikesProps) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<NotDone answer={likely} tone="attention" title={t("new.alikeTitle")}>
			{likely.length > 0 && (
				<>
					<p>{t("new.alikeBody")}</p>
					<ul className="my-2 list-disc pl-6">
						{likely.map(({ operationId, name, contactName, countyName, statePostal }) => (
							<li key={operationId}>
								<Link to={href("/desk/growers/:operationId", { operationId })}>{name}</Link>
								{`, ${contactName}, ${t("desk:growers.county", { county: countyName, state: statePostal })}`}
							</li>
						))}
					</ul>
				</>
			)}
			{owners.length > 0 && (
				<ChoiceField
					kind="radio"
					name="ownerId"
					legend={t("new.owner")}
					help={t("new.ownerSame")}
					defaultValue={owners[0]!.ownerId}
					options={[
						...owners.map(({ ownerId, name, operations }) => ({
							value: ownerId,
							label: t("new.ownerOf", { name, operations: format.list(operations) }),
						})),
						{ value: "", label: t("new.ownerOther", { name: ownerName }) },
					]}
				/>
			)}
			<CheckField name="confirmed" label={t("new.confirmed")} />
		</NotDone>
	);
}
