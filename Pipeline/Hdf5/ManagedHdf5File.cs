using System.Globalization;
using PureHDF;
using PureHDF.Selections;
using PureHDF.VOL.Native;

namespace Pipeline.Hdf5;

/// <summary>Reads with the managed library. It returns wrong numbers for some legal files: each such case is refused here.</summary>
sealed class ManagedHdf5File : IHdf5File
{
    /// <summary>Links are followed one by one and not deeper than this.</summary>
    const int DeepestPath = 32;
    readonly string _path, _name;
    readonly NativeFile _file;
    readonly Dictionary<string, IH5Dataset> _datasets = new(StringComparer.Ordinal);

    public ManagedHdf5File(string path)
    {
        (_path, _name) = (path, Path.GetFileName(path));
        _file = Guarded("/", () => H5File.Open(_path, FileMode.Open, FileAccess.Read, FileShare.Read));
    }

    public string Reader => "PureHDF 2.2.0";

    public void Dispose() => _file.Dispose();

    public bool HasDataset(string path) => Find(path) is not null;

    public DatasetShape Shape(string path)
    {
        IH5Dataset dataset = Dataset(path);
        return Guarded(path, () =>
        {
            ulong[] dimensions = dataset.Space.Dimensions, most = dataset.Space.MaxDimensions;
            for (int d = 1; d < dimensions.Length; d++)
                if (most[d] != dimensions[d])
                    throw Refuse(path, $"dimension {d} that may grow", "only the first dimension unlimited",
                        "read the file with the C library, or copy it with fixed dimensions");
            ulong[]? chunks = dataset.Layout.Class == H5DataLayoutClass.Chunked ? dataset.Layout.Chunks : null;
            CheckStorage(path, dataset, dimensions, chunks is null);
            return new DatasetShape([.. dimensions.Select(d => (long)d)], KindOf(dataset), (int)Math.Clamp(chunks?[0] ?? 1, 1, 1 << 20));
        });
    }

    public int[] ReadIntegers(string path, long firstRow, int rows)
    {
        IH5Dataset dataset = Dataset(path);
        HyperslabSelection part = Rows(dataset, firstRow, rows);
        bool signed = dataset.Type.FixedPoint.IsSigned;
        return Guarded(path, () => (dataset.Type.Size, signed) switch
        {
            (1, true) => Widen(dataset.Read<sbyte[]>(part), v => (int)v),
            (1, false) => Widen(dataset.Read<byte[]>(part), v => (int)v),
            (2, true) => Widen(dataset.Read<short[]>(part), v => (int)v),
            (2, false) => Widen(dataset.Read<ushort[]>(part), v => (int)v),
            (4, true) => dataset.Read<int[]>(part),
            (4, false) => Widen(dataset.Read<uint[]>(part), v => checked((int)v)),
            (8, true) => Widen(dataset.Read<long[]>(part), v => checked((int)v)),
            _ => throw Refuse(path, $"integers of {dataset.Type.Size} bytes", "integers that fit in 32 bits", "store the samples in a smaller type"),
        });
    }

    public double[] ReadReals(string path, long firstRow, int rows)
    {
        IH5Dataset dataset = Dataset(path);
        HyperslabSelection part = Rows(dataset, firstRow, rows);
        return Guarded(path, () => dataset.Type.Size switch
        {
            4 => Widen(dataset.Read<float[]>(part), v => (double)v),
            8 => dataset.Read<double[]>(part),
            _ => throw Refuse(path, $"floating-point numbers of {dataset.Type.Size} bytes", "4 or 8 bytes", "store the samples as float or double"),
        });
    }

    public double[] ReadNumbers(string path)
    {
        IH5Dataset dataset = Dataset(path);
        return Guarded(path, () => Numbers(path, dataset));
    }

    public string[] ReadLabels(string path)
    {
        IH5Dataset dataset = Dataset(path);
        if (KindOf(dataset) != ElementKind.Text)
            return [.. ReadNumbers(path).Select(v => v.ToString(CultureInfo.InvariantCulture))];
        CheckRank(path, dataset, 1);
        return Guarded(path, () => dataset.Read<string[]>().Select(s => (s ?? "").TrimEnd('\0', ' ')).ToArray());
    }

    public double ReadNumberAttribute(string path, string attribute) => Guarded($"{path}, attribute {attribute}", () =>
    {
        IH5Object holder = Find(path) ?? throw Missing(path);
        if (!holder.AttributeExists(attribute))
            throw Refuse($"{path}, attribute {attribute}", "no such attribute", "a number", "name the right attribute in the layout, or state the value there");
        IH5Attribute found = holder.Attribute(attribute);
        return (found.Type.Class, found.Type.Size) switch
        {
            (H5DataTypeClass.FloatingPoint, 8) => found.Read<double>(),
            (H5DataTypeClass.FloatingPoint, 4) => found.Read<float>(),
            (H5DataTypeClass.FixedPoint, 8) => found.Read<long>(),
            (H5DataTypeClass.FixedPoint, 4) => found.Type.FixedPoint.IsSigned ? found.Read<int>() : found.Read<uint>(),
            (H5DataTypeClass.FixedPoint, 2) => found.Type.FixedPoint.IsSigned ? found.Read<short>() : found.Read<ushort>(),
            _ => throw Refuse($"{path}, attribute {attribute}", $"a {found.Type.Class}", "a number", "state the value in the layout"),
        };
    });

    public string ReadTextAttribute(string path, string attribute) => Guarded($"{path}, attribute {attribute}", () =>
    {
        IH5Object holder = Find(path) ?? throw Missing(path);
        if (!holder.AttributeExists(attribute)) throw Refuse($"{path}, attribute {attribute}", "no such attribute", "a label", "name the right attribute in the layout");
        return holder.Attribute(attribute).Type.Class is H5DataTypeClass.String or H5DataTypeClass.VariableLength
            ? holder.Attribute(attribute).Read<string>().TrimEnd('\0', ' ') : ReadNumberAttribute(path, attribute).ToString(CultureInfo.InvariantCulture);
    });

    public IReadOnlyList<Hdf5Node> Describe(int most) => Guarded("/", () => Hdf5Walk.From(_file, most));

    public IReadOnlyList<string> Groups(string path) => Guarded(path, () =>
        (Find(path) as IH5Group ?? throw Missing(path)).Children().OfType<IH5Group>().Select(g => g.Name).Order(StringComparer.Ordinal).ToArray());

    double[] Numbers(string path, IH5Dataset dataset)
    {
        CheckRank(path, dataset, 1);
        bool real = dataset.Type.Class == H5DataTypeClass.FloatingPoint, signed = !real && dataset.Type.Class == H5DataTypeClass.FixedPoint && dataset.Type.FixedPoint.IsSigned;
        return (real, dataset.Type.Size, signed) switch
        {
            (true, 8, _) => dataset.Read<double[]>(),
            (true, 4, _) => Widen(dataset.Read<float[]>(), v => (double)v),
            (false, 8, true) => Widen(dataset.Read<long[]>(), v => (double)v),
            (false, 8, false) => Widen(dataset.Read<ulong[]>(), v => (double)v),
            (false, 4, true) => Widen(dataset.Read<int[]>(), v => (double)v),
            (false, 4, false) => Widen(dataset.Read<uint[]>(), v => (double)v),
            (false, 2, true) => Widen(dataset.Read<short[]>(), v => (double)v),
            (false, 2, false) => Widen(dataset.Read<ushort[]>(), v => (double)v),
            (false, 1, true) => Widen(dataset.Read<sbyte[]>(), v => (double)v),
            (false, 1, false) => Widen(dataset.Read<byte[]>(), v => (double)v),
            _ => throw Refuse(path, $"a {dataset.Type.Class} of {dataset.Type.Size} bytes", "numbers", "name a numeric dataset in the layout"),
        };
    }

    /// <summary>A declared size that the file cannot hold is refused before memory is asked for it.</summary>
    void CheckStorage(string path, IH5Dataset dataset, ulong[] dimensions, bool contiguous)
    {
        double bytes = dimensions.Aggregate((double)dataset.Type.Size, (a, d) => a * d);
        long length = new FileInfo(_path).Length;
        // deflate shrinks zeros by 1,030 at most, twice shuffled data no more
        if (bytes > (contiguous ? 1.0 : 1100.0) * length + 4096)
            throw Refuse(path, $"{bytes:G3} declared bytes in a file of {length}", "data that the file can hold", "the file is damaged or was never filled: record it again");
    }

    ElementKind KindOf(IH5Dataset dataset) => KindOf(dataset.Type);

    internal static ElementKind KindOf(IH5DataType type) => type.Class switch
    {
        H5DataTypeClass.FixedPoint => ElementKind.Integer,
        H5DataTypeClass.FloatingPoint => ElementKind.Real,
        H5DataTypeClass.String or H5DataTypeClass.VariableLength => ElementKind.Text,
        _ => ElementKind.Other,
    };

    void CheckRank(string path, IH5Dataset dataset, int rank)
    {
        if (dataset.Space.Rank != rank)
            throw Refuse(path, $"{dataset.Space.Rank} dimensions", $"{rank}", "name the right dataset in the layout");
    }

    static HyperslabSelection Rows(IH5Dataset dataset, long first, int rows)
    {
        ulong[] starts = new ulong[dataset.Space.Rank], counts = [.. dataset.Space.Dimensions];
        (starts[0], counts[0]) = ((ulong)first, (ulong)rows);
        return new HyperslabSelection(dataset.Space.Rank, starts, counts);
    }

    static TTo[] Widen<TFrom, TTo>(TFrom[] values, Converter<TFrom, TTo> convert) => Array.ConvertAll(values, convert);

    IH5Dataset Dataset(string path)
    {
        if (_datasets.TryGetValue(path, out IH5Dataset? known)) return known;
        IH5Object found = Find(path) ?? throw Missing(path);
        return _datasets[path] = found as IH5Dataset ?? throw Refuse(path, "a group", "a dataset", "name the right dataset in the layout");
    }

    /// <summary>Walks the path link by link: the library overflows the stack on a loop of soft links.</summary>
    IH5Object? Find(string path)
    {
        string[] parts = path.Split('/', StringSplitOptions.RemoveEmptyEntries);
        if (parts.Length > DeepestPath) throw Refuse(path, $"a path of {parts.Length} links", $"at most {DeepestPath}", "move the data up");
        return Guarded<IH5Object?>(path, () =>
        {
            IH5Object at = _file;
            foreach (string part in parts)
            {
                if (at is not IH5Group group || !group.LinkExists(part)) return null;
                at = group.Get(part);
            }
            return at;
        });
    }

    DataFaultException Missing(string path) => Refuse(path, "no such dataset", "a dataset of this path", "name the right path in the layout");

    DataFaultException Refuse(string path, string found, string expected, string remedy) => new($"{_name}, {path}", found, expected, remedy);

    T Guarded<T>(string path, Func<T> read)
    {
        try { return read(); }
        catch (DataFaultException) { throw; }
        catch (Exception e)
        {
            // the library throws many types for damaged files; each means the same to the user
            throw new DataFaultException($"{_name}, {path}", $"data that cannot be read ({e.GetType().Name}: {e.Message})", "an undamaged HDF5 file",
                "copy the file again, or record it again");
        }
    }
}
