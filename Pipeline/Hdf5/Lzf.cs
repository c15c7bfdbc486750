namespace Pipeline.Hdf5;

/// <summary>The LZF compression that numerical Python writes into HDF5 files, filter number 32000.</summary>
/// <remarks>Format: a control byte below 32 begins that many literals and one more; else its top three bits are the length less two (seven:
/// another byte is added) and the rest, with the next byte, the distance back less one.</remarks>
static class Lzf
{
    public const ushort FilterId = 32000;

    /// <summary>Fills <paramref name="plain"/> exactly from all of <paramref name="packed"/>; false where the stream is damaged.</summary>
    public static bool TryDecode(ReadOnlySpan<byte> packed, Span<byte> plain)
    {
        int from = 0, to = 0;
        while (from < packed.Length)
        {
            int control = packed[from++];
            if (control < 32)
            {
                int count = control + 1;
                if (from + count > packed.Length || to + count > plain.Length) return false;
                packed.Slice(from, count).CopyTo(plain[to..]);
                (from, to) = (from + count, to + count);
                continue;
            }
            int length = control >> 5;
            if (length == 7 && from < packed.Length) length += packed[from++];
            if (from >= packed.Length) return false;
            int start = to - ((control & 31) << 8) - packed[from++] - 1;
            length += 2;
            if (start < 0 || to + length > plain.Length) return false;
            // byte by byte: source and target may overlap, which repeats a pattern
            for (int k = 0; k < length; k++) plain[to++] = plain[start + k];
        }
        return to == plain.Length;
    }
}
