/** What code is offered in, by names that are the same in every language that people speak. */
export const codeLanguages = { curl: "curl", r: "R", python: "Python" } as const;
export type SnippetLanguage = keyof typeof codeLanguages;
export const snippetLanguages = Object.keys(codeLanguages) as SnippetLanguage[];

/**
 * How to ask for an address in three languages, ready to be run as it stands and without packages that do not come with
 * the language. Tables are read as CSV with codes as text, so that a county's code keeps its zeros.
 * @param fileName what a file is saved as; null for what is read at once.
 */
export function snippetOf(
	language: SnippetLanguage,
	address: string,
	{ csv, fileName }: { csv: boolean; fileName: string | null },
): string {
	const quoted = JSON.stringify(address);
	if (language === "curl") return curlOf(address, csv, fileName);
	if (language === "r") return rOf(quoted, csv, fileName);
	return pythonOf(quoted, csv, fileName);
}

/** In single quotes a shell takes everything as it stands, but for the quote itself. */
const shell = (text: string) => `'${text.replaceAll("'", `'\\''`)}'`;

function curlOf(address: string, csv: boolean, fileName: string | null): string {
	if (fileName) return `curl --fail --output ${shell(fileName)} ${shell(address)}`;
	return `curl --fail --header 'Accept: ${csv ? "text/csv" : "application/json"}' ${shell(address)}`;
}

function rOf(quoted: string, csv: boolean, fileName: string | null): string {
	if (fileName) return `download.file(${quoted}, ${JSON.stringify(fileName)}, mode = "wb")`;
	if (!csv) return `answer <- paste(readLines(url(${quoted}), warn = FALSE), collapse = "")`;
	return `answer <- url(${quoted}, headers = c(Accept = "text/csv"))
rows <- read.csv(answer, colClasses = "character", na.strings = "")`;
}

function pythonOf(quoted: string, csv: boolean, fileName: string | null): string {
	if (fileName) return `import urllib.request\n\nurllib.request.urlretrieve(${quoted}, ${JSON.stringify(fileName)})`;
	const accept = csv ? "text/csv" : "application/json";
	const read = csv ? `rows = list(csv.DictReader(io.TextIOWrapper(answer, "utf-8")))` : `data = json.load(answer)`;
	return `import ${csv ? "csv, io, urllib.request" : "json, urllib.request"}

request = urllib.request.Request(${quoted}, headers={"Accept": "${accept}"})
with urllib.request.urlopen(request) as answer:
    ${read}`;
}
