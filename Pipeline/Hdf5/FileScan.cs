using System.Buffers.Binary;

namespace Pipeline.Hdf5;

/// <summary>What the managed library would misread, or fall over, without a word.</summary>
[Flags]
enum Hazards
{
    None = 0,
    /// <summary>Soft or external links.</summary>
    Links = 1,
    /// <summary>Numbers with the most significant byte first.</summary>
    BigEndian = 2,
    /// <summary>Integers that fill only part of their bytes.</summary>
    PartialIntegers = 4,
    /// <summary>Chunks that were stored without one of their filters.</summary>
    SkippedFilters = 8,
}

/// <summary>Looks for hazards in the bytes of a file.</summary>
/// <remarks>HDF5 File Format Specification, version 3.0: datatype messages (IV.A.2.d), chunk indexes (III.A.1, VII), data layout (IV.A.2.i).
/// A pattern that stands in the data by chance costs a refusal, never a wrong number; each is of eight bytes or more.</remarks>
static class FileScan
{
    const int Window = 1 << 20, Overlap = 1 << 16;

    public static Hazards Of(Stream file)
    {
        byte[] buffer = new byte[Overlap + Window + Overlap];
        int begin = Overlap, kept = 0;
        Hazards found = Hazards.None;
        while (true)
        {
            // [begin - before, begin) was looked at, and serves patterns that are found by their end
            int got = file.ReadAtLeast(buffer.AsSpan(Overlap + kept), Window + Overlap - kept, throwOnEndOfStream: false);
            ReadOnlySpan<byte> all = buffer.AsSpan(begin, Overlap - begin + kept + got);
            bool last = kept + got < Window + Overlap;
            int looked = Overlap - begin, starts = last ? all.Length : looked + Window;
            if (LinkScan.FindsLinks(all, starts)) found |= Hazards.Links;
            found |= Types(all, starts);
            if (ChunkScan.FindsSkippedFilters(all, starts, file)) found |= Hazards.SkippedFilters;
            if (last) return found;
            buffer.AsSpan(Window, Overlap + Overlap).CopyTo(buffer);
            (begin, kept) = (0, Overlap);
        }
    }

    internal delegate bool Test(ReadOnlySpan<byte> block, ReadOnlySpan<byte> before);

    /// <summary>Whether a test holds at any place, below <paramref name="starts"/>, that begins with the mark.</summary>
    internal static bool Any(ReadOnlySpan<byte> bytes, int starts, ReadOnlySpan<byte> mark, Test test)
    {
        for (int at = 0; at < starts;)
        {
            int next = bytes[at..].IndexOf(mark);
            if (next < 0 || at + next >= starts) return false;
            at += next;
            if (test(bytes[at..Math.Min(bytes.Length, at + Overlap)], bytes[..at])) return true;
            at++;
        }
        return false;
    }

    static Hazards Types(ReadOnlySpan<byte> bytes, int starts)
    {
        Hazards found = Hazards.None;
        // class 0 in versions 1 to 3: order and sign in the first byte of the bit field, then size, bit offset, precision
        foreach (byte version in (ReadOnlySpan<byte>)[0x10, 0x20, 0x30])
        {
            for (byte bits = 0; bits < 16; bits++)
            {
                bool big = (bits & 1) != 0;
                if (Any(bytes, starts, [version, bits, 0, 0], (m, _) => IsInteger(m, out bool whole) && (big || !whole)))
                    found |= big ? Hazards.BigEndian | Partial(bytes, starts, version, bits) : Hazards.PartialIntegers;
            }
            byte real = (byte)(version + 1);
            foreach (byte bits in (ReadOnlySpan<byte>)[0x21, 0x2F, 0x61]) if (Any(bytes, starts, [real, bits], (m, _) => IsReal(m))) found |= Hazards.BigEndian;
        }
        return found;
    }

    static Hazards Partial(ReadOnlySpan<byte> bytes, int starts, byte version, byte bits) =>
        Any(bytes, starts, [version, bits, 0, 0], (m, _) => IsInteger(m, out bool whole) && !whole) ? Hazards.PartialIntegers : Hazards.None;

    static bool IsInteger(ReadOnlySpan<byte> m, out bool whole)
    {
        whole = true;
        if (m.Length < 12) return false;
        uint size = BinaryPrimitives.ReadUInt32LittleEndian(m[4..]);
        int offset = BinaryPrimitives.ReadUInt16LittleEndian(m[8..]), precision = BinaryPrimitives.ReadUInt16LittleEndian(m[10..]);
        whole = offset == 0 && precision == 8 * size;
        return size is 1 or 2 or 4 or 8 && precision > 0 && offset + precision <= 8 * size;
    }

    /// <summary>Sign in the top bit, IEEE places of exponent and mantissa.</summary>
    static bool IsReal(ReadOnlySpan<byte> m)
    {
        if (m.Length < 16 || m[3] != 0) return false;
        uint size = BinaryPrimitives.ReadUInt32LittleEndian(m[4..]);
        return size is 2 or 4 or 8 && m[2] == 8 * size - 1 && m[8] == 0 && m[9] == 0 && BinaryPrimitives.ReadUInt16LittleEndian(m[10..]) == 8 * size;
    }
}
