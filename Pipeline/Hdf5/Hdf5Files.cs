namespace Pipeline.Hdf5;

/// <summary>Opens HDF5 files, after looking at the bytes that no library should be trusted with.</summary>
public static class Hdf5Files
{
    static ReadOnlySpan<byte> Signature => [0x89, (byte)'H', (byte)'D', (byte)'F', 0x0d, 0x0a, 0x1a, 0x0a];

    /// <exception cref="DataFaultException">Missing, unreadable, not HDF5, cut short, or still being written.</exception>
    public static IHdf5File Open(string path)
    {
        CheckSuperblock(path);
        using (FileStream file = File.OpenRead(path))
            if (SoftLinkScan.Finds(file))
                throw new DataFaultException(Path.GetFileName(path), "soft links", "a file without soft links: a loop of them cannot be told from others in time",
                    "write the file without them, or copy it with the links resolved");
        return new ManagedHdf5File(path);
    }

    static void CheckSuperblock(string path)
    {
        string name = Path.GetFileName(path);
        byte[] head = new byte[4096];
        long length;
        int got;
        try
        {
            using FileStream file = File.OpenRead(path);
            length = file.Length;
            got = file.ReadAtLeast(head, head.Length, throwOnEndOfStream: false);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(name, $"a file that cannot be opened ({e.Message})", "a readable HDF5 file", "check name and permission");
        }
        if (length == 0) throw new DataFaultException(name, "an empty file", "an HDF5 file", "wait until it is written, or record it again");
        int at = FindSignature(head.AsSpan(0, got));
        if (at < 0) throw new DataFaultException(name, "no HDF5 signature", "an HDF5 file", "check that the run rule names the right layout");
        CheckEnd(name, head.AsSpan(at, got - at), at, length);
    }

    /// <summary>The signature stands at the start, or after a user block of 512 bytes times a power of two.</summary>
    static int FindSignature(ReadOnlySpan<byte> head)
    {
        for (int at = 0; at + Signature.Length <= head.Length; at = at == 0 ? 512 : 2 * at)
            if (head.Slice(at, Signature.Length).SequenceEqual(Signature)) return at;
        return -1;
    }

    /// <summary>The superblock states where the file ends, and whether a writer has it open.</summary>
    static void CheckEnd(string name, ReadOnlySpan<byte> block, int at, long length)
    {
        if (block.Length < 60) throw Short(name, length, 60);
        int version = block[8];
        bool classic = version is 0 or 1;
        int offsetSize = classic ? block[13] : block[9];
        if (version > 3 || offsetSize != 8)
            throw new DataFaultException(name, $"superblock version {version} with {offsetSize}-byte addresses", "version 0 to 3 with 8-byte addresses",
                "convert the file with the tools of the HDF5 library");
        int endAt = classic ? (version == 0 ? 24 : 28) + 16 : 12 + 16;
        ulong end = BitConverter.ToUInt64(block.Slice(endAt, 8));
        // classic files count from the start of the file or of the base address, both are seen: take the smaller claim
        if (end > (ulong)length && end - (ulong)at > (ulong)length) throw Short(name, length, (long)Math.Min(end, long.MaxValue));
        if (!classic && (block[11] & 1) != 0)
            throw new DataFaultException(name, "a file marked as open for writing", "a closed file", "wait until the acquisition has closed it");
    }

    static DataFaultException Short(string name, long length, long end) =>
        new(name, $"{length} bytes of {end}", "the whole file", "the file is cut short or still being written: copy or record it again");
}
