import type { Picture } from "#app/publish/picture.server.ts";
import type { TableCatalogue } from "#app/publish/tables/catalogue.ts";
import type { ToldChoice } from "#app/publish/tables/tell-table.ts";

/** What the page of tables is made of, whoever told it. */
export type TablePage = ToldChoice & {
	catalogue: TableCatalogue;
	/** Outlines, where the table has a map. */
	picture: Picture | null;
	approved: boolean;
	site: string;
	/** Told by the server, or in the browser out of the data API, or the API gave no answer. */
	state: "served" | "fetched" | "failed";
};
