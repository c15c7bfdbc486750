using System.Globalization;
using static Pipeline.Hdf5.Library.Declarations;

namespace Pipeline.Hdf5.Library;

/// <summary>Reads with the HDF5 C library. The library is called under one lock.</summary>
sealed unsafe class NativeHdf5File : IHdf5File
{
    const int Contiguous = 1, Virtual = 3;
    readonly LoadedLibrary _library;
    readonly string _path, _name;
    readonly NativeId _file;
    readonly NativeLinks _links;
    readonly bool _externalLinks;
    readonly Dictionary<string, NativeId> _datasets = new(StringComparer.Ordinal);

    public NativeHdf5File(LoadedLibrary library, string path, bool externalLinks)
    {
        (_library, _path, _name, _externalLinks) = (library, path, Path.GetFileName(path), externalLinks);
        _file = Guarded("/", () => new NativeId(H5Fopen(path, 0, 0), H5Fclose));
        _links = new NativeLinks(library, _file, _name, externalLinks);
    }

    public string Reader => _library.Version;

    public void Dispose()
    {
        lock (LibraryLoader.Gate)
        {
            foreach (NativeId dataset in _datasets.Values) dataset.Dispose();
            _file.Dispose();
        }
    }

    public DatasetShape Shape(string path) => Guarded(path, () =>
    {
        NativeId dataset = Dataset(path);
        ulong[] dimensions = Dimensions(dataset);
        using NativeId type = NativeId.Type(H5Dget_type(dataset));
        using var list = new NativeId(H5Dget_create_plist(dataset), H5Pclose);
        int layout = LibraryFailure.Check(H5Pget_layout(list));
        CheckInside(path, list, layout);
        double bytes = dimensions.Aggregate((double)H5Tget_size(type), (a, d) => a * d);
        long length = new FileInfo(_path).Length;
        if (layout != Virtual && H5Pget_external_count(list) == 0) Hdf5Limits.CheckStorage(_name, path, bytes, layout == Contiguous, length);
        if (layout != Virtual && bytes > 0 && H5Dget_storage_size(dataset) == 0)
            throw Refuse(path, "a dataset that nothing was ever written to", "data", "record the run again");
        ulong[] chunk = new ulong[Math.Max(1, dimensions.Length)];
        chunk[0] = 1;
        if (layout == 2) fixed (ulong* at = chunk) LibraryFailure.Check(H5Pget_chunk(list, chunk.Length, at));
        if (layout == 2) Hdf5Limits.CheckChunk(_name, path, chunk, H5Tget_size(type), length);
        return new DatasetShape([.. dimensions.Select(d => (long)d)], NativeValues.KindOf(type), (int)Math.Clamp(chunk[0], 1, 1 << 20));
    });

    public int[] ReadIntegers(string path, long firstRow, int rows) => Guarded(path, () =>
    {
        NativeId dataset = Dataset(path);
        using NativeId type = NativeId.Type(H5Dget_type(dataset));
        if (NativeValues.FitsInt32(type)) return Rows<int>(dataset, firstRow, rows, _library.Int32);
        return NativeValues.IsUnsigned(type)
            ? Array.ConvertAll(Rows<ulong>(dataset, firstRow, rows, _library.UInt64), v => v <= int.MaxValue ? (int)v : throw TooLarge(path, v.ToString(CultureInfo.InvariantCulture)))
            : Array.ConvertAll(Rows<long>(dataset, firstRow, rows, _library.Int64), v => v == (int)v ? (int)v : throw TooLarge(path, v.ToString(CultureInfo.InvariantCulture)));
    });

    public double[] ReadReals(string path, long firstRow, int rows) => Guarded(path, () => Rows<double>(Dataset(path), firstRow, rows, _library.Double));

    public double[] ReadNumbers(string path, string? field = null) => Guarded(path, () =>
    {
        NativeId dataset = Dataset(path);
        long count = Single(path, dataset);
        using NativeId type = Element(path, dataset, field);
        if (NativeValues.KindOf(type) is not (ElementKind.Integer or ElementKind.Real)) throw Refuse(path, NativeValues.Word(type), "numbers", "name a numeric dataset in the layout");
        return NativeValues.Numbers(_library, type, field, count, (memory, at) => LibraryFailure.Check(H5Dread(dataset, memory, 0, 0, 0, (void*)at)));
    });

    public string[] ReadLabels(string path, string? field = null) => Guarded(path, () =>
    {
        NativeId dataset = Dataset(path);
        long count = Single(path, dataset);
        using NativeId type = Element(path, dataset, field);
        return NativeValues.Labels(_library, type, field, count, (memory, at) => LibraryFailure.Check(H5Dread(dataset, memory, 0, 0, 0, (void*)at)));
    });

    public double[] ReadNumberAttributes(string path, string attribute) => Guarded($"{path}, attribute {attribute}", () => OfAttribute(path, attribute, (found, type, count) =>
        NativeValues.KindOf(type) is ElementKind.Integer or ElementKind.Real ? NativeValues.Numbers(_library, type, null, count, (memory, at) => LibraryFailure.Check(H5Aread(found, memory, (void*)at)))
            : throw Refuse($"{path}, attribute {attribute}", NativeValues.Word(type), "a number", "state the value in the layout")));

    public string[] ReadTextAttributes(string path, string attribute) => Guarded($"{path}, attribute {attribute}", () => OfAttribute(path, attribute, (found, type, count) =>
        NativeValues.Labels(_library, type, null, count, (memory, at) => LibraryFailure.Check(H5Aread(found, memory, (void*)at)))));

    public IReadOnlyList<string> Groups(string path) => Guarded(path, () =>
    {
        using NativeId group = _links.Open(path) ?? throw Missing(path);
        if (H5Iget_type(group) != NativeLinks.GroupType) throw Refuse(path, "a dataset", "a group", "name the right group in the layout");
        return NativeLinks.Names(group).Where(name =>
        {
            using NativeId? child = _links.Open($"{path}/{name}");
            return child is not null && H5Iget_type(child) == NativeLinks.GroupType;
        }).ToArray();
    });

    /// <summary>The path by hard links of this file alone; null where it leads into another file.</summary>
    public string? HardPath(string path) => Guarded(path, () =>
    {
        using NativeId found = _links.Open(path, out string? hard) ?? throw Missing(path);
        if (H5Iget_type(found) == NativeLinks.DatasetType)
        {
            using var list = new NativeId(H5Dget_create_plist(found), H5Pclose);
            CheckInside(path, list, H5Pget_layout(list));
        }
        return hard;
    });

    public IReadOnlyList<Hdf5Node> Describe(int most) => Guarded("/", () => new NativeWalk(_library, _links).From(most));

    void CheckInside(string path, NativeId list, int layout)
    {
        if (!_externalLinks && (layout == Virtual || H5Pget_external_count(list) > 0))
            throw Refuse(path, layout == Virtual ? "a virtual dataset, put together from other files" : "data in another file", "data in this file", "copy the data into the file, or set external_links = true in the layout");
    }

    internal static ulong[] Dimensions(long dataset)
    {
        using NativeId space = NativeId.Space(H5Dget_space(dataset));
        return OfSpace(space);
    }

    static ulong[] OfSpace(long space)
    {
        // a null dataspace holds nothing
        if (H5Sget_simple_extent_type(space) == 2) return [0];
        ulong[] dimensions = new ulong[LibraryFailure.Check(H5Sget_simple_extent_ndims(space))];
        fixed (ulong* at = dimensions) LibraryFailure.Check(H5Sget_simple_extent_dims(space, at, null));
        return dimensions;
    }

    T OfAttribute<T>(string path, string attribute, Func<NativeId, NativeId, long, T> read)
    {
        using NativeId holder = _links.Open(path) ?? throw Missing(path);
        if (LibraryFailure.Check(H5Aexists(holder, attribute)) == 0)
            throw Refuse($"{path}, attribute {attribute}", "no such attribute", "an attribute of this name", "name the right attribute in the layout, or state the value there");
        using var found = new NativeId(H5Aopen(holder, attribute, 0), H5Aclose);
        using NativeId type = NativeId.Type(H5Aget_type(found)), space = NativeId.Space(H5Aget_space(found));
        long count = OfSpace(space).Aggregate(1L, (a, d) => checked(a * (long)d));
        return read(found, type, count);
    }

    /// <summary>Rows along the first dimension, whole in all others.</summary>
    static T[] Rows<T>(NativeId dataset, long first, int rows, long memoryType) where T : unmanaged
    {
        using NativeId space = NativeId.Space(H5Dget_space(dataset));
        ulong[] counts = OfSpace(space), starts = new ulong[counts.Length];
        (starts[0], counts[0]) = ((ulong)first, (ulong)rows);
        var values = new T[counts.Aggregate(1L, (a, d) => checked(a * (long)d))];
        if (values.Length == 0) return values;
        fixed (ulong* start = starts, count = counts)
        fixed (T* at = values)
        {
            LibraryFailure.Check(H5Sselect_hyperslab(space, 0, start, null, count, null));
            using NativeId memory = NativeId.Space(H5Screate_simple(counts.Length, count, null));
            LibraryFailure.Check(H5Dread(dataset, memoryType, memory, space, 0, at));
        }
        return values;
    }

    long Single(string path, NativeId dataset)
    {
        ulong[] dimensions = Dimensions(dataset);
        if (dimensions.Length != 1) throw Refuse(path, $"{dimensions.Length} dimensions", "1", "name the right dataset in the layout");
        using NativeId type = NativeId.Type(H5Dget_type(dataset));
        Hdf5Limits.CheckStorage(_name, path, dimensions[0] * (double)H5Tget_size(type), false, new FileInfo(_path).Length);
        return (long)dimensions[0];
    }

    /// <summary>Type of the elements, or of one field of them.</summary>
    NativeId Element(string path, NativeId dataset, string? field)
    {
        NativeId type = NativeId.Type(H5Dget_type(dataset));
        if (field is null) return type;
        using (type)
        {
            if (NativeValues.KindOf(type) != ElementKind.Table) throw Refuse(path, NativeValues.Word(type), "a table with named fields", "name the right dataset in the layout");
            int at = H5Tget_member_index(type, field);
            return at >= 0 ? NativeId.Type(H5Tget_member_type(type, (uint)at))
                : throw Refuse(path, $"no field \"{field}\"", $"one of {string.Join(", ", NativeValues.Members(type))}", "name the right field in the layout");
        }
    }

    NativeId Dataset(string path)
    {
        if (_datasets.TryGetValue(path, out NativeId? known)) return known;
        NativeId found = _links.Open(path) ?? throw Missing(path);
        if (H5Iget_type(found) == NativeLinks.DatasetType) return _datasets[path] = found;
        found.Dispose();
        throw Refuse(path, "a group", "a dataset", "name the right dataset in the layout");
    }

    DataFaultException TooLarge(string path, string value) => Refuse(path, value, "integers that fit in 32 bits", "store the samples in a smaller type");

    DataFaultException Missing(string path) => Refuse(path, "no such dataset", "a dataset of this path", "name the right path in the layout");

    DataFaultException Refuse(string path, string found, string expected, string remedy) => new($"{_name}, {path}", found, expected, remedy);

    T Guarded<T>(string path, Func<T> read)
    {
        lock (LibraryLoader.Gate)
        {
            try { return read(); }
            catch (Exception e) when (e is LibraryFailure or OverflowException or OutOfMemoryException)
            {
                throw new DataFaultException($"{_name}, {path}", $"data that cannot be read ({e.Message})", "an undamaged HDF5 file that no program has open for writing",
                    "wait until the acquisition has closed it, copy it again, or record it again");
            }
        }
    }
}
