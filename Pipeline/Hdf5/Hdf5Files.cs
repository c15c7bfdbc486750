using Pipeline.Hdf5.Library;

namespace Pipeline.Hdf5;

/// <summary>Which library reads.</summary>
public enum Hdf5Reader
{
    /// <summary>The C library where the machine has it, else the managed one.</summary>
    Best,
    Library,
    Managed,
}

/// <summary>How a file is opened.</summary>
/// <param name="Reader">Which library reads.</param>
/// <param name="ExternalLinks">Whether links into other files are followed.</param>
public sealed record Hdf5Access(Hdf5Reader Reader = Hdf5Reader.Best, bool ExternalLinks = false)
{
    /// <summary>The best reader, no external links. ARRIVALS_HDF5 = "managed" in the environment leaves the C library aside.</summary>
    public static Hdf5Access Usual { get; } = new(Environment.GetEnvironmentVariable("ARRIVALS_HDF5") == "managed" ? Hdf5Reader.Managed : Hdf5Reader.Best);
}

/// <summary>Opens HDF5 files, after looking at the bytes that no library should be trusted with.</summary>
public static class Hdf5Files
{
    static ReadOnlySpan<byte> Signature => [0x89, (byte)'H', (byte)'D', (byte)'F', 0x0d, 0x0a, 0x1a, 0x0a];

    /// <param name="path">The file.</param>
    /// <param name="access">Which library reads, and what it may follow.</param>
    /// <exception cref="DataFaultException">Missing, unreadable, not HDF5, cut short, or still being written.</exception>
    public static IHdf5File Open(string path, Hdf5Access? access = null)
    {
        access ??= Hdf5Access.Usual;
        CheckSuperblock(path);
        using (FileStream file = File.OpenRead(path))
            if (HeapScan.FindsDamage(file))
                throw new DataFaultException(Path.GetFileName(path), "a damaged heap of strings", "an undamaged HDF5 file", "copy the file again, or record it again");
        LoadedLibrary? library = access.Reader == Hdf5Reader.Managed ? null : LibraryLoader.Current;
        if (library is null && access.Reader == Hdf5Reader.Library)
            throw new DataFaultException(Path.GetFileName(path), "no HDF5 C library of version 1.10 or later on this machine", "one", "install it (on Debian the package libhdf5-103-1), or let the managed reader read");
        return library is null ? new ManagedHdf5File(path, alone: true) : new CheckedHdf5File(path, library, access.ExternalLinks);
    }

    /// <summary>Whether the machine has the HDF5 C library.</summary>
    public static bool HasLibrary => LibraryLoader.Current is not null;

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
