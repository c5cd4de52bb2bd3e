import { useTranslation } from "react-i18next";
import { useRouteLoaderData } from "react-router";

export type ToastData = { key: string; values?: Record<string, string | number>; tone?: "good" | "attention" };

/** What every page's shell draws from; the root's loader gives it. */
export type ShellData = {
	language: "en" | "es";
	demo: boolean;
	toast: ToastData | null;
	visitor: {
		displayName: string;
		/** Tells this person's pages from those of others. */
		holder: string;
		areas: { desk: boolean; network: boolean; orchard: boolean; dataroom: boolean };
	} | null;
};

/** Undefined where a guard refused before any loader ran. */
export function useShellData(): ShellData | undefined {
	return useRouteLoaderData<ShellData>("root");
}

/** Whether this is a demonstration; known also where no loader ran, since every page has to say it. */
export function useDemo(): boolean {
	const { i18n } = useTranslation();
	const shell = useShellData();
	if (shell) return shell.demo;
	if (typeof document !== "undefined") return document.documentElement.dataset.demo === "yes";
	return (i18n.options as { demo?: boolean }).demo === true;
}
