import { crc32 } from 'node:zlib';

/** A zip archive without compression and with a fixed date: enough to be a real workbook container, and the same bytes each time. */
export function storedZip(entries: Readonly<Record<string, string>>): Buffer {
  const parts: Buffer[] = [];
  const directory: Buffer[] = [];
  let offset = 0;
  for (const [name, text] of Object.entries(entries)) {
    const nameBytes = Buffer.from(name, 'utf8');
    const content = Buffer.from(text, 'utf8');
    const facts = Buffer.alloc(26);
    facts.writeUInt16LE(20, 0); // version needed
    facts.writeUInt16LE(0x5821, 8); // date: 2024-01-01
    facts.writeUInt32LE(crc32(content), 10);
    facts.writeUInt32LE(content.length, 14);
    facts.writeUInt32LE(content.length, 18);
    facts.writeUInt16LE(nameBytes.length, 22);
    parts.push(Buffer.from('PK\u0003\u0004', 'latin1'), facts, nameBytes, content);
    const place = Buffer.alloc(14);
    place.writeUInt32LE(offset, 10);
    directory.push(Buffer.from('PK\u0001\u0002\u0014\u0000', 'latin1'), facts, place, nameBytes);
    offset += 4 + facts.length + nameBytes.length + content.length;
  }
  const central = Buffer.concat(directory);
  const end = Buffer.alloc(22);
  end.write('PK\u0005\u0006', 'latin1');
  end.writeUInt16LE(Object.keys(entries).length, 8);
  end.writeUInt16LE(Object.keys(entries).length, 10);
  end.writeUInt32LE(central.length, 12);
  end.writeUInt32LE(offset, 16);
  return Buffer.concat([...parts, central, end]);
}
