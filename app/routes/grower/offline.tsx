import { languages } from "#app/i18n/language.ts";
// oxlint-disable-next-line import/default -- the query makes it the address of the built script
import offlineApp from "./phone/offline/app.tsx?worker&url";

export const handle = { bare: true };

/** The page that a phone puts away for when there is no signal. It holds nothing of anybody: the phone draws its own in it. */
export function loader() {
	return null;
}

export default function Offline() {
	return (
		<div id="offline">
			<div className="mx-auto max-w-(--width-narrow) px-gutter py-8 text-lg">
				{languages.map((language) => (
					<p key={language} lang={language} className="mt-4">
						{noSignal[language]}
					</p>
				))}
			</div>
			<script type="module" src={offlineApp} />
		</div>
	);
}

// Which language the phone holds is not known before it is read.
const noSignal = {
	en: "There is no signal, and this phone does not hold this page. Open it again when signal is back.",
	es: "No hay señal y este teléfono no tiene guardada esta página. Ábrala otra vez cuando vuelva la señal.",
};
