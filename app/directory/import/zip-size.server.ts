import { inflateRawSync } from "node:zlib";

const endMark = 0x06054b50;
const entryMark = 0x02014b50;

/**
 * Whether all that a zip file holds comes to no more than `most` bytes. Every part is let out once under that bound, since
 * the sizes that the file tells of itself can be untrue: a small file that is huge inside would take the process's memory.
 * @returns false also for what is no zip file.
 */
export function unzipsWithin(file: Buffer, most: number): boolean {
	const end = file.lastIndexOf(Buffer.from([0x50, 0x4b, 0x05, 0x06]));
	if (end < 0 || end + 22 > file.length || file.readUInt32LE(end) !== endMark) return false;
	const count = file.readUInt16LE(end + 10);
	let at = file.readUInt32LE(end + 16);
	let left = most;
	try {
		for (let entry = 0; entry < count; entry++) {
			if (file.readUInt32LE(at) !== entryMark) return false;
			const method = file.readUInt16LE(at + 10);
			const packed = file.readUInt32LE(at + 20);
			const local = file.readUInt32LE(at + 42);
			const start = local + 30 + file.readUInt16LE(local + 26) + file.readUInt16LE(local + 28);
			const part = file.subarray(start, start + packed);
			left -= method === 0 ? part.length : inflateRawSync(part, { maxOutputLength: Math.max(1, left) }).length;
			if (left < 0) return false;
			at += 46 + file.readUInt16LE(at + 28) + file.readUInt16LE(at + 30) + file.readUInt16LE(at + 32);
		}
		return true;
	} catch {
		// Too large once let out, cut short, or not what it says.
		return false;
	}
}
