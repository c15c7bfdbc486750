using Pipeline.Hdf5.Library;

namespace Pipeline.Hdf5;

/// <summary>The C library for numbers, the managed one for structure and text.</summary>
/// <remarks>The C library (1.10.8) ends the process, or searches without end, on some damaged files: about once in a thousand where four
/// bytes of a small file were turned over, always in strings of variable length or behind metadata that the managed library, safe in memory,
/// refuses. So that one looks first, and reads all strings of variable length; numbers come from the C library, and both must see the same
/// shape.</remarks>
sealed class CheckedHdf5File : IHdf5File
{
    readonly ManagedHdf5File _managed;
    readonly Lazy<NativeHdf5File> _native;
    readonly Dictionary<string, string?> _hardPaths = new(StringComparer.Ordinal);

    public CheckedHdf5File(string path, LoadedLibrary library, bool externalLinks)
    {
        _managed = new ManagedHdf5File(path, alone: false);
        Reader = library.Version;
        _native = new Lazy<NativeHdf5File>(() => new NativeHdf5File(library, path, externalLinks));
    }

    public string Reader { get; }

    public void Dispose()
    {
        _managed.Dispose();
        if (_native.IsValueCreated) _native.Value.Dispose();
    }

    public DatasetShape Shape(string path) => Either(path, (f, at) => f.Shape(at));

    public IReadOnlyList<Hdf5Node> Describe(int most) => Links ? _native.Value.Describe(most) : _managed.Describe(most);

    public IReadOnlyList<string> Groups(string path) => Links ? _native.Value.Groups(path) : _managed.Groups(path);

    public int[] ReadIntegers(string path, long firstRow, int rows) => Bulk(path).ReadIntegers(path, firstRow, rows);

    public double[] ReadReals(string path, long firstRow, int rows) => Bulk(path).ReadReals(path, firstRow, rows);

    public double[] ReadNumbers(string path, string? field = null) =>
        Misreads ? Bulk(path).ReadNumbers(path, field) : Either(path, (f, at) => f.ReadNumbers(at, field));

    public string[] ReadLabels(string path, string? field = null)
    {
        if (Hard(path) is { } hard && _managed.IsVariableText(hard, field))
            return _managed.Hazards.HasFlag(Hazards.SkippedFilters) ? throw Unchecked(path) : _managed.ReadLabels(hard, field);
        return Misreads ? Bulk(path).ReadLabels(path, field) : Either(path, (f, at) => f.ReadLabels(at, field));
    }

    public double[] ReadNumberAttributes(string path, string attribute) =>
        Misreads ? _native.Value.ReadNumberAttributes(path, attribute) : Either(path, (f, at) => f.ReadNumberAttributes(at, attribute));

    public string[] ReadTextAttributes(string path, string attribute) =>
        Misreads && !(Hard(path) is { } hard && _managed.IsVariableTextAttribute(hard, attribute))
            ? _native.Value.ReadTextAttributes(path, attribute) : Either(path, (f, at) => f.ReadTextAttributes(at, attribute));

    bool Links => _managed.Hazards.HasFlag(Hazards.Links);

    bool Misreads => (_managed.Hazards & ~Hazards.Links) != Hazards.None;

    /// <summary>The path by hard links of this file alone, as the managed library may follow it; null where it leads into another file.</summary>
    string? Hard(string path)
    {
        if (!Links) return path;
        if (!_hardPaths.TryGetValue(path, out string? hard)) _hardPaths[path] = hard = _native.Value.HardPath(path);
        return hard;
    }

    T Either<T>(string path, Func<IHdf5File, string, T> read)
    {
        if (Hard(path) is not { } hard) return read(_native.Value, path);
        try { return read(_managed, hard); }
        catch (ManagedLimitException) { return read(_native.Value, path); }
    }

    NativeHdf5File Bulk(string path)
    {
        DatasetShape seen = Shape(path), given = _native.Value.Shape(path);
        return seen.Dimensions.SequenceEqual(given.Dimensions) && seen.Elements == given.Elements ? _native.Value
            : throw new DataFaultException(path, $"shape [{string.Join(", ", seen.Dimensions)}] by one reader, [{string.Join(", ", given.Dimensions)}] by the other", "one shape", "the file is damaged: copy it again, or record it again");
    }

    static DataFaultException Unchecked(string path) => new(path, "strings of variable length in a file with chunks stored without one of their filters", "strings of fixed length", "write the labels with a fixed length");
}
