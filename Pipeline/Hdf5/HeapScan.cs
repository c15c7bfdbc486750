using System.Buffers.Binary;

namespace Pipeline.Hdf5;

/// <summary>Looks whether the heaps that hold strings of variable length are whole: the managed library takes the size of a string from a
/// damaged one, and asks for that much memory.</summary>
/// <remarks>HDF5 File Format Specification, version 3.0, III.E: "GCOL", version, three zeros, size (8); then objects of index (2), references
/// (2), four zeros, size (8) and data in multiples of 8; index 0 holds what is free and ends the heap.</remarks>
static class HeapScan
{
    const int Head = 16;

    public static bool FindsDamage(Stream file)
    {
        const int Window = 1 << 20;
        byte[] buffer = new byte[Window];
        for (long at = 0; at < file.Length;)
        {
            file.Position = at;
            int got = file.ReadAtLeast(buffer, Window, throwOnEndOfStream: false), from = 0;
            for (int next; (next = buffer.AsSpan(from, got - from).IndexOf("GCOL"u8)) >= 0; from += next + 4)
                if (IsDamaged(file, at + from + next)) return true;
            if (got < Window) return false;
            // a mark may lie across the end of the window
            at += got - 3;
        }
        return false;
    }

    static bool IsDamaged(Stream file, long at)
    {
        Span<byte> head = stackalloc byte[Head];
        // another version is none of this format: data that look like a heap, or one that the libraries refuse themselves
        if (!Read(file, at, head) || head[4] != 1 || (head[5] | head[6] | head[7]) != 0) return false;
        ulong size = BinaryPrimitives.ReadUInt64LittleEndian(head[8..]);
        if (size < 4096 || (ulong)at + size > (ulong)file.Length) return true;
        long end = at + (long)size;
        for (long place = at + Head; end - place >= Head;)
        {
            if (!Read(file, place, head)) return true;
            ulong bytes = BinaryPrimitives.ReadUInt64LittleEndian(head[8..]);
            if (BinaryPrimitives.ReadUInt16LittleEndian(head) == 0) return bytes > (ulong)(end - place);
            if (bytes > (ulong)(end - place - Head)) return true;
            place += Head + (long)((bytes + 7) & ~7UL);
        }
        return false;
    }

    static bool Read(Stream file, long at, Span<byte> bytes)
    {
        file.Position = at;
        return file.ReadAtLeast(bytes, bytes.Length, throwOnEndOfStream: false) == bytes.Length;
    }
}
