using System.Buffers.Binary;

namespace Pipeline.Hdf5;

/// <summary>Looks for soft links in the bytes of a file, without any library.</summary>
/// <remarks>The managed library recurses without end on a loop of soft links and takes the process, and so the night, with it; it offers no
/// way to see a link without following it. Link storage after the HDF5 File Format Specification, version 3.0: symbol table nodes (III.C),
/// object headers of version 2 (IV.A.1.b) and fractal heap direct blocks (III.G) with link messages (IV.A.2.g).</remarks>
static class SoftLinkScan
{
    const int Window = 1 << 20, Overlap = 1 << 16;

    public static bool Finds(Stream file)
    {
        byte[] buffer = new byte[Window + Overlap];
        int kept = 0;
        while (true)
        {
            int got = file.ReadAtLeast(buffer.AsSpan(kept), buffer.Length - kept, throwOnEndOfStream: false);
            ReadOnlySpan<byte> all = buffer.AsSpan(0, kept + got);
            bool last = kept + got < buffer.Length;
            if (Finds(all, last ? all.Length : Window)) return true;
            if (last) return false;
            all[Window..].CopyTo(buffer);
            kept = all.Length - Window;
        }
    }

    static bool Finds(ReadOnlySpan<byte> bytes, int starts) =>
        Any(bytes, starts, "SNOD"u8, InSymbolTable) || Any(bytes, starts, "OHDR"u8, InObjectHeader)
        || Any(bytes, starts, "OCHK"u8, block => InMessages(block[4..], creationOrder: true) || InMessages(block[4..], creationOrder: false))
        || Any(bytes, starts, "FHDB"u8, InHeapBlock);

    delegate bool Test(ReadOnlySpan<byte> block);

    static bool Any(ReadOnlySpan<byte> bytes, int starts, ReadOnlySpan<byte> signature, Test test)
    {
        for (int at = 0; at < starts;)
        {
            int next = bytes[at..].IndexOf(signature);
            if (next < 0 || at + next >= starts) return false;
            at += next;
            if (test(bytes[at..Math.Min(bytes.Length, at + Overlap)])) return true;
            at += signature.Length;
        }
        return false;
    }

    /// <summary>Entries of 40 bytes; cache type 2 marks a soft link.</summary>
    static bool InSymbolTable(ReadOnlySpan<byte> node)
    {
        if (node.Length < 8 || node[4] != 1) return false;
        int entries = BinaryPrimitives.ReadUInt16LittleEndian(node[6..]);
        for (int k = 0; k < entries && 8 + 40 * (k + 1) <= node.Length; k++)
            if (BinaryPrimitives.ReadUInt32LittleEndian(node[(8 + 40 * k + 16)..]) == 2) return true;
        return false;
    }

    static bool InObjectHeader(ReadOnlySpan<byte> header)
    {
        if (header.Length < 8 || header[4] != 2) return false;
        int flags = header[5], at = 6 + ((flags & 32) != 0 ? 16 : 0) + ((flags & 16) != 0 ? 4 : 0) + (1 << (flags & 3));
        return at < header.Length && InMessages(header[at..], (flags & 4) != 0);
    }

    /// <summary>Messages of type (1), size (2), flags (1) and creation order (2, where tracked); type 6 is a link.</summary>
    static bool InMessages(ReadOnlySpan<byte> messages, bool creationOrder)
    {
        int head = creationOrder ? 6 : 4;
        for (int at = 0; at + head < messages.Length;)
        {
            int size = BinaryPrimitives.ReadUInt16LittleEndian(messages[(at + 1)..]), end = at + head + size;
            if (end > messages.Length || messages[at] > 0x18) return false;
            if (messages[at] == 6 && IsSoftLink(messages[(at + head)..end])) return true;
            at = end;
        }
        return false;
    }

    /// <summary>Managed objects of a heap have no marks between them: every place that reads as a soft link message is taken for one.</summary>
    static bool InHeapBlock(ReadOnlySpan<byte> block)
    {
        for (int at = 13; at + 8 < block.Length; at++) if (IsSoftLink(block[at..])) return true;
        return false;
    }

    /// <summary>Version 1, a flag that the type is stated, type 1, a name and a target that fit, in printable characters.</summary>
    static bool IsSoftLink(ReadOnlySpan<byte> m)
    {
        if (m.Length < 6 || m[0] != 1 || (m[1] & 8) == 0 || (m[1] & 0xE0) != 0 || m[2] != 1) return false;
        int at = 3 + ((m[1] & 4) != 0 ? 8 : 0) + ((m[1] & 16) != 0 ? 1 : 0), width = 1 << (m[1] & 3);
        if (width > 2 || at + width > m.Length) return false;
        int length = width == 1 ? m[at] : BinaryPrimitives.ReadUInt16LittleEndian(m[at..]);
        if (!Printable(m, at + width, length)) return false;
        at += width + length;
        return at + 2 <= m.Length && Printable(m, at + 2, BinaryPrimitives.ReadUInt16LittleEndian(m[at..]));
    }

    static bool Printable(ReadOnlySpan<byte> m, int at, int length) =>
        length > 0 && at + length <= m.Length && m.Slice(at, length).IndexOfAnyExceptInRange((byte)0x20, (byte)0xFE) < 0;
}
