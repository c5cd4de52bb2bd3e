import { useTranslation } from "react-i18next";

type Granted = { role: string; stateFips: string | null; operationName: string | null };

/** A grant in words: its role, and the state or the operation that it is for. */
export function useGrantWords() {
	const { t } = useTranslation("network");
	return ({ role: key, stateFips, operationName }: Granted) => {
		const role = t(`common:role.${key}`);
		if (stateFips) return t("people.roleIn", { role, state: t(`common:state.${stateFips}`) });
		return operationName ? t("people.roleFor", { role, operation: operationName }) : role;
	};
}
