import { zipSync } from "fflate";
import { expect, test } from "vitest";
import { measureZip } from "./zip-size.server.ts";

const packed = Buffer.from(zipSync({ "a.xml": new Uint8Array(5_000), "b.xml": new Uint8Array(5_000) }));

test("a file is measured by what it holds, not by its own size", () => {
	expect(packed.length).toBeLessThan(1_000);
	expect(measureZip(packed, 10_000)).toBe("within");
	expect(measureZip(packed, 9_999)).toBe("too_large");
	expect(measureZip(packed, 1_000)).toBe("too_large");
});

test("what was cut short or spoilt is broken, however small", () => {
	expect(measureZip(packed.subarray(0, -30), 10_000)).toBe("broken");
	const spoilt = Buffer.from(packed);
	spoilt.fill(0xff, 35, 45);
	expect(measureZip(spoilt, 10_000)).toBe("broken");
});
