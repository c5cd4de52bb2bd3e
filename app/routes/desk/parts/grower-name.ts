import { useTranslation } from "react-i18next";

/** What an operation is called: its name, or that it has left and was forgotten. */
export function useGrowerName() {
	const { t } = useTranslation("desk");
	return (name: string): string => name || t("grower.forgotten");
}
