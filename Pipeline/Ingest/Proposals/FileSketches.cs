namespace Pipeline.Ingest;

/// <summary>Looks into a file that is not known yet.</summary>
public static class FileSketches
{
    /// <param name="path">An HDF5 or CSV file, or a folder of CSV files.</param>
    /// <exception cref="DataFaultException">Missing, unreadable, or neither.</exception>
    public static FileSketch Of(string path)
    {
        if (Directory.Exists(path)) return CsvSketch.OfFolder(path);
        if (!File.Exists(path)) throw new DataFaultException(path, "no such file", "an HDF5 or CSV file, or a folder of CSV files", "check the name");
        return Path.GetExtension(path) is ".h5" or ".hdf5" or ".hdf" || BeginsAsHdf5(path) ? Hdf5Sketch.Of(path) : CsvSketch.OfFile(path);
    }

    static bool BeginsAsHdf5(string path)
    {
        Span<byte> first = stackalloc byte[4];
        using FileStream file = Opened(path);
        return file.ReadAtLeast(first, 4, throwOnEndOfStream: false) == 4 && first is [0x89, (byte)'H', (byte)'D', (byte)'F'];
    }

    static FileStream Opened(string path)
    {
        try { return File.OpenRead(path); }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(Path.GetFileName(path), $"a file that cannot be opened ({e.Message})", "a readable file", "check name and permission");
        }
    }
}
