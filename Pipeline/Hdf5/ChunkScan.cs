using System.Buffers.Binary;

namespace Pipeline.Hdf5;

/// <summary>Looks for chunks that were stored without one of their filters: the managed library does not see the mask that says so.</summary>
/// <remarks>HDF5 File Format Specification, version 3.0: version 1 B-trees (III.A.1), fixed arrays (VII.C), extensible arrays (VII.D), a single
/// chunk (IV.A.2.i, version 4). The fifth index, a version 2 B-tree, belongs to datasets that may grow in two dimensions: refused elsewhere.</remarks>
static class ChunkScan
{
    public static bool FindsSkippedFilters(ReadOnlySpan<byte> bytes, int starts, Stream file) =>
        FileScan.Any(bytes, starts, "TREE"u8, (node, _) => InTree(node, file.Length)) || FileScan.Any(bytes, starts, "FADB"u8, (block, _) => InArray(block, file, prefix: 14))
        || FileScan.Any(bytes, starts, "EAIB"u8, (block, _) => InArray(block, file, prefix: 14)) || FileScan.Any(bytes, starts, "EADB"u8, (block, _) => InArray(block, file, prefix: 22))
        || FileScan.Any(bytes, starts, [4, 2], (message, _) => InLayout(message));

    /// <summary>Keys of size (4), mask (4) and offsets (8 a dimension, and a zero), each before the address of a chunk.</summary>
    static bool InTree(ReadOnlySpan<byte> node, long length)
    {
        if (node.Length < 24 || node[4] != 1) return false;
        int entries = BinaryPrimitives.ReadUInt16LittleEndian(node[6..]);
        for (int rank = 1; rank <= 8; rank++)
        {
            int stride = 8 + 8 * (rank + 1) + 8;
            if (24 + stride * entries > node.Length) break;
            bool fits = entries > 0, skipped = false;
            for (int k = 0; k < entries && fits; k++)
            {
                ReadOnlySpan<byte> key = node.Slice(24 + k * stride, stride);
                fits = BinaryPrimitives.ReadUInt32LittleEndian(key) is > 0 and < int.MaxValue && BinaryPrimitives.ReadUInt64LittleEndian(key[(8 + 8 * rank)..]) == 0
                    && BinaryPrimitives.ReadUInt64LittleEndian(key[^8..]) < (ulong)length;
                skipped |= BinaryPrimitives.ReadUInt32LittleEndian(key[4..]) != 0;
            }
            if (fits) return skipped;
        }
        return false;
    }

    /// <summary>Elements of address (8), size and mask (4); how wide stands in the header. Looked through until an address is none.</summary>
    static bool InArray(ReadOnlySpan<byte> block, Stream file, int prefix)
    {
        const int Filtered = 1;
        if (block.Length < prefix || block[4] != 0 || block[5] != Filtered) return false;
        ulong header = BinaryPrimitives.ReadUInt64LittleEndian(block[6..]);
        if (header + 16 > (ulong)file.Length) return false;
        Span<byte> head = stackalloc byte[16];
        long back = file.Position;
        file.Position = (long)header;
        file.ReadExactly(head);
        file.Position = back;
        bool extensible = head.StartsWith("EAHD"u8);
        if (!extensible && !head.StartsWith("FAHD"u8)) return false;
        int element = head[6];
        if (element is < 13 or > 20) return false;
        // the offset of an extensible block is as wide as the largest number of elements needs
        int at = extensible && prefix == 22 ? 14 + (head[7] + 7) / 8 : 14;
        for (; at + element <= block.Length; at += element)
        {
            ulong address = BinaryPrimitives.ReadUInt64LittleEndian(block[at..]);
            if (address == ulong.MaxValue) continue;
            if (address >= (ulong)file.Length) return false;
            if (BinaryPrimitives.ReadUInt32LittleEndian(block[(at + element - 4)..]) is > 0 and < 1 << 16) return true;
        }
        return false;
    }

    /// <summary>Version 4, chunked, a single filtered chunk: dimensions, index type 1, size (8), mask (4).</summary>
    static bool InLayout(ReadOnlySpan<byte> m)
    {
        if (m.Length < 5 || (m[2] & 2) == 0 || m[2] > 3 || m[3] is < 2 or > 9 || m[4] is < 1 or > 8) return false;
        int at = 5 + m[3] * m[4];
        return at + 13 <= m.Length && m[at] == 1 && BinaryPrimitives.ReadUInt64LittleEndian(m[(at + 1)..]) is > 0 and < int.MaxValue
            && BinaryPrimitives.ReadUInt32LittleEndian(m[(at + 9)..]) is > 0 and < 1 << 16;
    }
}
