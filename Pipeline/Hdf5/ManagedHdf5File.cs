using System.Globalization;
using PureHDF;
using PureHDF.Filters;
using PureHDF.Selections;
using PureHDF.VOL.Native;

namespace Pipeline.Hdf5;

/// <summary>Reads with the managed library. It returns wrong numbers for some legal files: each such case is refused here.</summary>
sealed class ManagedHdf5File : IHdf5File
{
    /// <summary>Links are followed one by one and not deeper than this.</summary>
    const int DeepestPath = 64;
    const string UseLibrary = "install the HDF5 C library (on Debian the package libhdf5-103-1), which reads it, or write the file without";
    readonly string _path, _name;
    readonly NativeFile _file;
        readonly Dictionary<string, IH5Dataset> _datasets = new(StringComparer.Ordinal);

    static ManagedHdf5File() => H5Filter.Register(new ManagedLzf());

    /// <param name="path">The file.</param>
    /// <param name="alone">Whether no other library reads: then files that this one may misread are refused as a whole. Else the caller
    /// looks at <see cref="Hazards"/>.</param>
    public ManagedHdf5File(string path, bool alone)
    {
        (_path, _name) = (path, Path.GetFileName(path));
        using (FileStream file = File.OpenRead(path)) Hazards = FileScan.Of(file);
        if (alone && Hazards.HasFlag(Hazards.Links)) throw Beyond("/", "links to other places or files", "a file without them: a loop of them would end the program");
        if (alone && Hazards.HasFlag(Hazards.PartialIntegers)) throw Beyond("/", "integers that fill only part of their bytes", "whole bytes");
        if (alone && Hazards.HasFlag(Hazards.SkippedFilters)) throw Beyond("/", "chunks stored without one of their filters", "all chunks stored in one way");
        _file = Guarded("/", () => H5File.Open(new EndedStream(_path), leaveOpen: false));
    }

    public string Reader => "PureHDF 2.2.0";

    /// <summary>What the library would misread, or fall over.</summary>
    public Hazards Hazards { get; }

    /// <summary>Whether the labels are strings of variable length, or a field of these.</summary>
    public bool IsVariableText(string path, string? field) => Guarded(path, () =>
    {
        IH5DataType? type = Dataset(path).Type;
        if (field is not null) type = type.Class == H5DataTypeClass.Compound ? type.Compound.Members.FirstOrDefault(m => m.Name == field)?.Type : null;
        return type?.Class == H5DataTypeClass.VariableLength;
    });

    /// <summary>The same of an attribute.</summary>
    public bool IsVariableTextAttribute(string path, string attribute) => Guarded(path, () => Attribute(path, attribute).Type.Class == H5DataTypeClass.VariableLength);

    public void Dispose() => _file.Dispose();

    public DatasetShape Shape(string path)
    {
        IH5Dataset dataset = Dataset(path);
        return Guarded(path, () =>
        {
            ulong[] dimensions = dataset.Space.Dimensions, most = dataset.Space.MaxDimensions;
            for (int d = 1; d < dimensions.Length; d++)
                if (most[d] != dimensions[d])
                    throw Beyond(path, $"dimension {d} that may grow", "only the first dimension unlimited");
            if (dataset.Layout.Class == H5DataLayoutClass.VirtualStorage) throw Beyond(path, "a virtual dataset", "data in this file");
            ulong[]? chunks = dataset.Layout.Class == H5DataLayoutClass.Chunked ? dataset.Layout.Chunks : null;
            CheckStorage(path, dataset, dimensions, chunks is null);
            if (chunks is not null) Hdf5Limits.CheckChunk(_name, path, chunks.Take(dimensions.Length), dataset.Type.Size, new FileInfo(_path).Length);
            return new DatasetShape([.. dimensions.Select(d => (long)d)], KindOf(dataset), (int)Math.Clamp(chunks?[0] ?? 1, 1, 1 << 20));
        });
    }

    public int[] ReadIntegers(string path, long firstRow, int rows)
    {
        IH5Dataset dataset = Dataset(path);
        HyperslabSelection part = Rows(dataset, firstRow, rows);
        bool signed = dataset.Type.FixedPoint.IsSigned;
        var held = new ManagedHolder(dataset, part);
        return Guarded(path, () => (dataset.Type.Size, signed) switch
        {
            (1, true) => Array.ConvertAll(held.Read<sbyte>(), v => (int)v),
            (1, false) => Array.ConvertAll(held.Read<byte>(), v => (int)v),
            (2, true) => Array.ConvertAll(held.Read<short>(), v => (int)v),
            (2, false) => Array.ConvertAll(held.Read<ushort>(), v => (int)v),
            (4, true) => held.Read<int>(),
            (4, false) => Array.ConvertAll(held.Read<uint>(), v => checked((int)v)),
            (8, true) => Array.ConvertAll(held.Read<long>(), v => checked((int)v)),
            (8, false) => Array.ConvertAll(held.Read<ulong>(), v => checked((int)v)),
            _ => throw Refuse(path, $"integers of {dataset.Type.Size} bytes", "integers that fit in 32 bits", "store the samples in a smaller type"),
        });
    }

    public double[] ReadReals(string path, long firstRow, int rows)
    {
        IH5Dataset dataset = Dataset(path);
        HyperslabSelection part = Rows(dataset, firstRow, rows);
        return Guarded(path, () => ManagedValues.Numbers(dataset.Type, new(dataset, part))
            ?? throw Refuse(path, $"a {dataset.Type.Class} of {dataset.Type.Size} bytes", "numbers of 2, 4 or 8 bytes", "store the samples as float or double"));
    }

    public double[] ReadNumbers(string path, string? field = null) => Guarded(path, () => field is null ? Numbers(path, Dataset(path))
        : [.. Column(path, Dataset(path), field).Select(v => v is string ? throw Refuse($"{path}, field {field}", "text", "numbers", "name a numeric field in the layout") : Convert.ToDouble(v, CultureInfo.InvariantCulture))]);

    public string[] ReadLabels(string path, string? field = null) => Guarded<string[]>(path, () =>
    {
        IH5Dataset dataset = Dataset(path);
        if (field is not null) return FieldLabels(path, dataset, field);
        CheckRank(path, dataset, 1);
        return dataset.Type.Class switch
        {
            H5DataTypeClass.String or H5DataTypeClass.VariableLength => [.. dataset.Read<string[]>().Select(Trimmed)],
            H5DataTypeClass.Enumerated => [.. ManagedValues.Whole(dataset.Type.Enumeration.BaseType, new(dataset)).Select(v => ManagedValues.NameOf(dataset.Type, v))],
            _ => [.. Numbers(path, dataset).Select(v => v.ToString(CultureInfo.InvariantCulture))],
        };
    });

    string[] FieldLabels(string path, IH5Dataset dataset, string field)
    {
        object[] values = Column(path, dataset, field);
        IH5DataType type = dataset.Type.Compound.Members.First(m => m.Name == field).Type;
        return [.. values.Select(v => v is string text ? Trimmed(text)
            : type.Class == H5DataTypeClass.Enumerated ? ManagedValues.NameOf(type, Convert.ToInt64(v, CultureInfo.InvariantCulture)) : Convert.ToDouble(v, CultureInfo.InvariantCulture).ToString(CultureInfo.InvariantCulture))];
    }

    /// <summary>One field of a table; fields of other than the machine's order of bytes would be misread.</summary>
    object[] Column(string path, IH5Dataset dataset, string field)
    {
        if (dataset.Type.Class != H5DataTypeClass.Compound) throw Refuse(path, Hdf5Walk.Word(dataset.Type), "a table with named fields", "name the right dataset in the layout");
        bool text = dataset.Type.Compound.Members.Any(m => m.Name == field && m.Type.Class is H5DataTypeClass.String or H5DataTypeClass.VariableLength);
        if (Hazards.HasFlag(Hazards.BigEndian) && !text) throw Beyond(path, "a table in a file with big-endian numbers", "numbers with the least significant byte first");
        CheckRank(path, dataset, 1);
        CheckStorage(path, dataset, dataset.Space.Dimensions, false);
        if (dataset.Type.Compound.Members.All(m => m.Name != field))
            throw Refuse(path, $"no field \"{field}\"", $"one of {string.Join(", ", dataset.Type.Compound.Members.Select(m => m.Name))}", "name the right field in the layout");
        return [.. dataset.Read<Dictionary<string, object>[]>().Select(row => row[field])];
    }

    public double[] ReadNumberAttributes(string path, string attribute) => Guarded($"{path}, attribute {attribute}", () =>
    {
        IH5Attribute found = Attribute(path, attribute);
        return ManagedValues.Numbers(found.Type, new(found)) ?? throw Refuse($"{path}, attribute {attribute}", $"a {found.Type.Class}", "a number", "state the value in the layout");
    });

    public string[] ReadTextAttributes(string path, string attribute) => Guarded<string[]>($"{path}, attribute {attribute}", () =>
    {
        IH5Attribute found = Attribute(path, attribute);
        bool scalar = found.Space.Rank == 0;
        return found.Type.Class switch
        {
            H5DataTypeClass.String or H5DataTypeClass.VariableLength => [.. (scalar ? [found.Read<string>()] : found.Read<string[]>()).Select(Trimmed)],
            H5DataTypeClass.Enumerated => [.. ManagedValues.Whole(found.Type.Enumeration.BaseType, new(found)).Select(v => ManagedValues.NameOf(found.Type, v))],
            _ => [.. ReadNumberAttributes(path, attribute).Select(v => v.ToString(CultureInfo.InvariantCulture))],
        };
    });

    IH5Attribute Attribute(string path, string attribute)
    {
        IH5Object holder = Find(path) ?? throw Missing(path);
        if (!holder.AttributeExists(attribute))
            throw Refuse($"{path}, attribute {attribute}", "no such attribute", "an attribute of this name", "name the right attribute in the layout, or state the value there");
        IH5Attribute found = holder.Attribute(attribute);
        // an attribute stands in the metadata, which is read as it is
        Hdf5Limits.CheckStorage(_name, $"{path}, attribute {attribute}", found.Space.Dimensions.Aggregate((double)found.Type.Size, (a, d) => a * d), true, new FileInfo(_path).Length);
        return found;
    }

    static string Trimmed(string? text) => (text ?? "").TrimEnd('\0', ' ');

    public IReadOnlyList<Hdf5Node> Describe(int most) => Guarded("/", () => Hdf5Walk.From(_file, most));

    public IReadOnlyList<string> Groups(string path) => Guarded(path, () =>
        (Find(path) as IH5Group ?? throw Missing(path)).Children().OfType<IH5Group>().Select(g => g.Name).Order(StringComparer.Ordinal).ToArray());

    double[] Numbers(string path, IH5Dataset dataset)
    {
        CheckRank(path, dataset, 1);
        CheckStorage(path, dataset, dataset.Space.Dimensions, false);
        return ManagedValues.Numbers(dataset.Type, new(dataset)) ?? throw Refuse(path, $"a {dataset.Type.Class} of {dataset.Type.Size} bytes", "numbers", "name a numeric dataset in the layout");
    }

    void CheckStorage(string path, IH5Dataset dataset, ulong[] dimensions, bool contiguous) =>
        Hdf5Limits.CheckStorage(_name, path, dimensions.Aggregate((double)dataset.Type.Size, (a, d) => a * d), contiguous, new FileInfo(_path).Length);

    ElementKind KindOf(IH5Dataset dataset) => KindOf(dataset.Type);

    internal static ElementKind KindOf(IH5DataType type) => type.Class switch
    {
        H5DataTypeClass.FixedPoint => ElementKind.Integer,
        H5DataTypeClass.FloatingPoint => ElementKind.Real,
        H5DataTypeClass.String or H5DataTypeClass.VariableLength or H5DataTypeClass.Enumerated => ElementKind.Text,
        H5DataTypeClass.Compound => ElementKind.Table,
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
                // among links that may form a loop only those are asked for that the other library has found
                if (at is not IH5Group group || (!Hazards.HasFlag(Hazards.Links) && !group.LinkExists(part))) return null;
                at = group.Get(part);
            }
            return at;
        });
    }

    ManagedLimitException Beyond(string path, string found, string expected) => new(new Fault($"{_name}, {path}", found, expected, UseLibrary));

    DataFaultException Missing(string path) => Refuse(path, "no such dataset", "a dataset of this path", "name the right path in the layout");

    DataFaultException Refuse(string path, string found, string expected, string remedy) => new($"{_name}, {path}", found, expected, remedy);

    T Guarded<T>(string path, Func<T> read)
    {
        try { return read(); }
        catch (DataFaultException) { throw; }
        catch (Exception e) when (ManagedHolder.IsByteOrder(e))
        {
            throw Beyond(path, "big-endian numbers", "numbers with the least significant byte first");
        }
        catch (Exception e)
        {
            // the library throws many types for damaged files; each means the same to the user
            throw new DataFaultException($"{_name}, {path}", $"data that cannot be read ({e.GetType().Name}: {e.Message})", "an undamaged HDF5 file",
                "copy the file again, or record it again");
        }
    }
}
