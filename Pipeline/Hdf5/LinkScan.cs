using System.Buffers.Binary;

namespace Pipeline.Hdf5;

/// <summary>Looks for soft links, external links and lists of external files in the bytes of a file, without any library.</summary>
/// <remarks>The managed library recurses without end on a loop of soft links and takes the process, and so the night, with it; it offers no
/// way to see a link without following it. Link storage after the HDF5 File Format Specification, version 3.0: symbol table nodes (III.C),
/// object headers (IV.A.1) and fractal heap direct blocks (III.G) with link messages (IV.A.2.g).</remarks>
static class LinkScan
{
    const byte Soft = 1, External = 64;

    public static bool FindsLinks(ReadOnlySpan<byte> bytes, int starts) =>
        FileScan.Any(bytes, starts, "SNOD"u8, InSymbolTable) || FileScan.Any(bytes, starts, "OHDR"u8, InObjectHeader)
        || FileScan.Any(bytes, starts, "OCHK"u8, (block, _) => InMessages(block[4..], creationOrder: true) || InMessages(block[4..], creationOrder: false))
        || FileScan.Any(bytes, starts, "FHDB"u8, InHeapBlock) || FileScan.Any(bytes, starts, [0, 0, 0, 1], InOldMessage);

    /// <summary>A message in an object header of version 1: type (2), size (2), flags (1), three zeros; then the message. Found by its zeros
    /// and its version.</summary>
    static bool InOldMessage(ReadOnlySpan<byte> zeros, ReadOnlySpan<byte> before) =>
        before.Length >= 5 && before[^4] == 0 && BinaryPrimitives.ReadUInt16LittleEndian(before[^3..]) is var size && size + 3 <= zeros.Length && LeadsAway(before[^5], zeros.Slice(3, size));

    /// <summary>Message type 6 is a link, 7 a list of other files that hold a dataset's bytes (IV.A.2.h).</summary>
    static bool LeadsAway(byte type, ReadOnlySpan<byte> message) => type switch
    {
        6 => IsLink(message),
        7 => message.Length >= 16 && message[0] == 1 && (message[1] | message[2] | message[3]) == 0 && BinaryPrimitives.ReadUInt16LittleEndian(message[6..]) > 0,
        _ => false,
    };

    /// <summary>Entries of 40 bytes; cache type 2 marks a soft link.</summary>
    static bool InSymbolTable(ReadOnlySpan<byte> node, ReadOnlySpan<byte> before)
    {
        if (node.Length < 8 || node[4] != 1) return false;
        int entries = BinaryPrimitives.ReadUInt16LittleEndian(node[6..]);
        for (int k = 0; k < entries && 8 + 40 * (k + 1) <= node.Length; k++)
            if (BinaryPrimitives.ReadUInt32LittleEndian(node[(8 + 40 * k + 16)..]) == 2) return true;
        return false;
    }

    static bool InObjectHeader(ReadOnlySpan<byte> header, ReadOnlySpan<byte> before)
    {
        if (header.Length < 8 || header[4] != 2) return false;
        int flags = header[5], at = 6 + ((flags & 32) != 0 ? 16 : 0) + ((flags & 16) != 0 ? 4 : 0) + (1 << (flags & 3));
        return at < header.Length && InMessages(header[at..], (flags & 4) != 0);
    }

    /// <summary>Messages of type (1), size (2), flags (1) and creation order (2, where tracked).</summary>
    static bool InMessages(ReadOnlySpan<byte> messages, bool creationOrder)
    {
        int head = creationOrder ? 6 : 4;
        for (int at = 0; at + head < messages.Length;)
        {
            int size = BinaryPrimitives.ReadUInt16LittleEndian(messages[(at + 1)..]), end = at + head + size;
            if (end > messages.Length || messages[at] > 0x18) return false;
            if (LeadsAway(messages[at], messages[(at + head)..end])) return true;
            at = end;
        }
        return false;
    }

    /// <summary>Managed objects of a heap have no marks between them: every place that reads as a soft link message is taken for one.</summary>
    static bool InHeapBlock(ReadOnlySpan<byte> block, ReadOnlySpan<byte> before)
    {
        for (int at = 13; at + 8 < block.Length; at++) if (IsLink(block[at..])) return true;
        return false;
    }

    /// <summary>Version 1, a flag that the type is stated, type soft or external, a name and a target that fit, in printable characters.</summary>
    static bool IsLink(ReadOnlySpan<byte> m)
    {
        if (m.Length < 6 || m[0] != 1 || (m[1] & 8) == 0 || (m[1] & 0xE0) != 0 || m[2] is not (Soft or External)) return false;
        int at = 3 + ((m[1] & 4) != 0 ? 8 : 0) + ((m[1] & 16) != 0 ? 1 : 0), width = 1 << (m[1] & 3);
        if (width > 2 || at + width > m.Length) return false;
        int length = width == 1 ? m[at] : BinaryPrimitives.ReadUInt16LittleEndian(m[at..]);
        if (!Printable(m, at + width, length, 0x20)) return false;
        at += width + length;
        // the target of an external link is flags, a file and a path, with nulls between
        return at + 2 <= m.Length && Printable(m, at + 2, BinaryPrimitives.ReadUInt16LittleEndian(m[at..]), m[2] == Soft ? (byte)0x20 : (byte)0);
    }

    static bool Printable(ReadOnlySpan<byte> m, int at, int length, byte lowest) =>
        length > 0 && at + length <= m.Length && m.Slice(at, length).IndexOfAnyExceptInRange(lowest, (byte)0xFE) < 0;
}
