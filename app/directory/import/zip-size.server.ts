import { inflateRawSync } from "node:zlib";

const endMark = 0x06054b50;
const entryMark = 0x02014b50;

/**
 * Whether all that a zip file holds comes to no more than `most` bytes. Every part is let out once under that bound, since
 * the sizes that the file tells of itself can be untrue: a small file that is huge inside would take the process's memory.
 * @returns "broken" for what is no zip file, or not all of one.
 */
export function measureZip(file: Buffer, most: number): "within" | "too_large" | "broken" {
	const end = file.lastIndexOf(Buffer.from([0x50, 0x4b, 0x05, 0x06]));
	if (end < 0 || end + 22 > file.length || file.readUInt32LE(end) !== endMark) return "broken";
	const count = file.readUInt16LE(end + 10);
	let at = file.readUInt32LE(end + 16);
	let left = most;
	try {
		for (let entry = 0; entry < count; entry++) {
			if (file.readUInt32LE(at) !== entryMark) return "broken";
			const method = file.readUInt16LE(at + 10);
			const packed = file.readUInt32LE(at + 20);
			const local = file.readUInt32LE(at + 42);
			const start = local + 30 + file.readUInt16LE(local + 26) + file.readUInt16LE(local + 28);
			const part = file.subarray(start, start + packed);
			left -= method === 0 ? part.length : inflateRawSync(part, { maxOutputLength: Math.max(1, left) }).length;
			if (left < 0) return "too_large";
			at += 46 + file.readUInt16LE(at + 28) + file.readUInt16LE(at + 30) + file.readUInt16LE(at + 32);
		}
		return "within";
	} catch (error) {
		// Cut short, or not what it says, unless the bound was met.
		return error instanceof Error && "code" in error && error.code === "ERR_BUFFER_TOO_LARGE" ? "too_large" : "broken";
	}
}
