import { useCallback, useEffect, useState } from "react";
import { useNavigate, useSearchParams } from "react-router";

/** How long the address waits, so that walking by arrow keys does not change it at every step. */
const pause = 300;

/**
 * The area chosen on the map: at once for the eye and the ear, a moment later in the address, so that a link reproduces
 * the view. Another map (release, measure, crop, kind of area), or a name that was searched for and is no area's, begins
 * with what its own address says.
 */
export function useChosenArea(): [string | null, (areaKey: string | null) => void] {
	const navigate = useNavigate();
	const [search] = useSearchParams();
	const inAddress = search.get("area") || null;
	const map = withArea(search, null);
	const asked = `${map} ${search.get("find") ?? ""}`;
	const [chosen, setChosen] = useState({ asked, areaKey: inAddress });
	const areaKey = chosen.asked === asked ? chosen.areaKey : inAddress;

	useEffect(() => {
		if (areaKey === inAddress) return;
		const address = `?${withArea(new URLSearchParams(map), areaKey)}`;
		const waiting = setTimeout(() => void navigate(address, { replace: true, preventScrollReset: true }), pause);
		return () => clearTimeout(waiting);
	}, [areaKey, inAddress, map, navigate]);

	const choose = useCallback((next: string | null) => setChosen({ asked, areaKey: next }), [asked]);
	return [areaKey, choose];
}

function withArea(search: URLSearchParams, areaKey: string | null): string {
	const next = new URLSearchParams(search);
	next.delete("area");
	next.delete("find");
	if (areaKey) next.set("area", areaKey);
	return next.toString();
}
