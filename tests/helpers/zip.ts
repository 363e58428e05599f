import { crc32, deflateRawSync } from 'node:zlib';

/** A file of a zip, and what is to be wrong about it. */
export interface ZipEntry {
	name: string;
	content: Uint8Array;
	/** general purpose flag says that it is locked */
	encrypted?: boolean;
	/** what the directory says of its size; the truth when absent */
	claimedBytes?: number;
}

/** Writes a zip as APPNOTE 6.3 describes it: local headers, central directory, its end. */
export function zipOf(entries: readonly ZipEntry[]): Buffer {
	const locals: Buffer[] = [];
	const directory: Buffer[] = [];
	let offset = 0;
	for (const { name, content, encrypted = false, claimedBytes = content.length } of entries) {
		const packed = deflateRawSync(content);
		const nameBytes = Buffer.from(name);
		const common = Buffer.alloc(26);
		common.writeUInt16LE(20, 0);
		common.writeUInt16LE(0x800 | (encrypted ? 1 : 0), 2);
		common.writeUInt16LE(8, 4);
		common.writeUInt32LE(crc32(content), 10);
		common.writeUInt32LE(packed.length, 14);
		common.writeUInt32LE(claimedBytes, 18);
		common.writeUInt16LE(nameBytes.length, 22);
		const local = Buffer.concat([Buffer.from('PK\x03\x04', 'latin1'), common, nameBytes, packed]);
		const tail = Buffer.alloc(14);
		tail.writeUInt32LE(offset, 10);
		const madeBy = Buffer.from([20, 0]);
		directory.push(Buffer.concat([Buffer.from('PK\x01\x02', 'latin1'), madeBy, common, tail, nameBytes]));
		locals.push(local);
		offset += local.length;
	}
	const central = Buffer.concat(directory);
	const end = Buffer.alloc(22);
	end.write('PK\x05\x06', 'latin1');
	end.writeUInt16LE(entries.length, 8);
	end.writeUInt16LE(entries.length, 10);
	end.writeUInt32LE(central.length, 12);
	end.writeUInt32LE(offset, 16);
	return Buffer.concat([...locals, central, end]);
}
