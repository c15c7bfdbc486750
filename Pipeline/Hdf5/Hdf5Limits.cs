namespace Pipeline.Hdf5;

/// <summary>What no undamaged file can claim.</summary>
static class Hdf5Limits
{
    /// <summary>A declared size that the file cannot hold is refused before memory is asked for it.</summary>
    /// <param name="name">File.</param>
    /// <param name="path">Dataset.</param>
    /// <param name="bytes">As declared.</param>
    /// <param name="contiguous">Whether nothing is compressed.</param>
    /// <param name="length">Of the file, bytes.</param>
    public static void CheckStorage(string name, string path, double bytes, bool contiguous, long length)
    {
        // deflate shrinks zeros by 1,030 at most, twice shuffled data no more
        if (bytes > (contiguous ? 1.0 : 1100.0) * length + 4096)
            throw new DataFaultException($"{name}, {path}", FormattableString.Invariant($"{bytes:G3} declared bytes in a file of {length}"), "data that the file can hold",
                "the file is damaged or was never filled: record it again");
    }

    /// <summary>A chunk is read as a whole: one that no file of this length can hold is refused before memory is asked for it.</summary>
    public static void CheckChunk(string name, string path, IEnumerable<ulong> chunk, double elementBytes, long length) =>
        CheckStorage(name, $"{path}, a chunk", chunk.Aggregate(elementBytes, (a, d) => a * d), false, length);
}
