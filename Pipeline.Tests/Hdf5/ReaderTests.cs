using System.Text.Json;
using Pipeline.Hdf5;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Hdf5;

/// <summary>Both readers against h5py, on files of every kind that it writes.</summary>
/// <remarks>The managed reader may refuse what it cannot read; it never gives other numbers.</remarks>
public sealed class ReaderTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-hdf5").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    static readonly string[] Types = ["i1", "u1", "<i2", ">i2", "<u2", ">u2", "<i4", ">i4", "<u4", "<i8", ">i8", "<u8", "<f2", "<f4", ">f4", "<f8", ">f8"];

    static readonly string[] Storages =
    [
        "", ", chunks=(3, 50)", ", chunks=(4, 33), compression='gzip'", ", chunks=(3, 7), compression='gzip', shuffle=True", ", chunks=(4, 50), fletcher32=True",
        ", chunks=(4, 50), compression='gzip', shuffle=True, fletcher32=True", ", chunks=(5, 50), compression='lzf'", ", chunks=(3, 50), compression='lzf', shuffle=True",
        ", maxshape=(None, 50), chunks=(2, 50), compression='gzip'", ", maxshape=(None, None), chunks=(2, 20)",
    ];

    public static TheoryData<Hdf5Reader, string, string> Versions()
    {
        var rows = new TheoryData<Hdf5Reader, string, string>();
        foreach (Hdf5Reader reader in (Hdf5Reader[])[Hdf5Reader.Library, Hdf5Reader.Managed])
            foreach (string version in (string[])["earliest", "v108", "v110", "latest"])
                foreach (string storage in Storages) rows.Add(reader, version, storage);
        return rows;
    }

    [SkippableTheory]
    [MemberData(nameof(Versions))]
    public void ReadRows_EveryTypeAndStorage_IsWhatH5pyReads(Hdf5Reader reader, string version, string storage)
    {
        Skip.If(reader == Hdf5Reader.Library && !Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        string path = Path.Combine(_folder, "t.h5");
        using JsonDocument expected = JsonDocument.Parse(Python.Write(path, $$"""
            base = (np.arange(10*50).reshape(10, 50) * 37 % 101)
            for k, t in enumerate({{JsonSerializer.Serialize(Types)}}):
                a = (base - (50 if np.dtype(t).kind != 'u' else 0)).astype(t) if np.dtype(t).kind != 'f' else (base / 7 - 5).astype(t)
                f.create_dataset('d%d' % k, data=a{{storage}})
            f.close()
            f = h5py.File(path, 'r')
            print(json.dumps([[float(v) for v in f['d%d' % k][2:9].ravel()] for k in range({{Types.Length}})]))
            """, options: $", libver='{version}'"));
        int refused = 0;
        using IHdf5File file = Hdf5Files.Open(path, new Hdf5Access(reader));
        for (int k = 0; k < Types.Length; k++)
        {
            double[] truth = [.. expected.RootElement[k].EnumerateArray().Select(v => v.GetDouble())];
            try
            {
                DatasetShape shape = file.Shape($"d{k}");
                Assert.Equal([10, 50], shape.Dimensions);
                double[] found = shape.Elements == ElementKind.Integer ? [.. file.ReadIntegers($"d{k}", 2, 7).Select(v => (double)v)] : file.ReadReals($"d{k}", 2, 7);
                Assert.Equal(truth, found);
            }
            catch (DataFaultException e) when (reader == Hdf5Reader.Managed)
            {
                refused++;
                Assert.NotEmpty(e.Fault.Remedy);
            }
        }
        // only a second dimension that may grow is refused
        Assert.Equal(reader == Hdf5Reader.Managed && storage.Contains("None, None", StringComparison.Ordinal) ? Types.Length : 0, refused);
    }

    [SkippableTheory]
    [InlineData(Hdf5Reader.Library)]
    [InlineData(Hdf5Reader.Managed)]
    public void ReadLabels_StringsEnumsBooleansTablesAndAttributes_AreWhatWasWritten(Hdf5Reader reader)
    {
        Skip.If(reader == Hdf5Reader.Library && !Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        string path = Path.Combine(_folder, "t.h5");
        Python.Write(path, """
            f['fixed'] = np.array([b'on', b'off', b'on'])
            f.create_dataset('variable', data=['on', 'off', 'µ'], dtype=h5py.string_dtype())
            f['flag'] = np.array([True, False, True])
            f.create_dataset('enum', data=np.array([1, 0, 7], 'u2'), dtype=h5py.enum_dtype({'ON': 1, 'OFF': 0, 'STUCK': 7}, basetype='u2'))
            f['number'] = np.array([0, 1, 1], 'i1')
            t = np.zeros(3, np.dtype([('shot', '<i4'), ('kind', 'S12'), ('on', '?'), ('v', '<f8'), ('state', h5py.enum_dtype({'A': 3, 'B': 4}, basetype='i1')), ('who', h5py.string_dtype())]))
            t['shot'] = [5, 6, 7]; t['kind'] = [b'signal', b'dark', b'signal']; t['on'] = [1, 0, 1]; t['v'] = [.5, 1.5, 2.5]; t['state'] = [3, 4, 3]; t['who'] = ['x', '', 'zz']
            f['table'] = t
            f['a'] = np.arange(4.)
            f['a'].attrs['many'] = np.array([1.5, 2.5])
            f['a'].attrs['one'] = np.int16(-3)
            f['a'].attrs['big'] = np.array([1, 2], '>i4')
            f['a'].attrs['flag'] = True
            f['a'].attrs['texts'] = np.array([b'x', b'yy'])
            f['a'].attrs['text'] = 'hello'
            """);
        using IHdf5File file = Hdf5Files.Open(path, new Hdf5Access(reader));
        Assert.Equal(["on", "off", "on"], file.ReadLabels("fixed"));
        Assert.Equal(["on", "off", "µ"], file.ReadLabels("variable"));
        Assert.Equal(["TRUE", "FALSE", "TRUE"], file.ReadLabels("flag"));
        Assert.Equal(["ON", "OFF", "STUCK"], file.ReadLabels("enum"));
        Assert.Equal(["0", "1", "1"], file.ReadLabels("number"));
        Assert.Equal([1.5, 2.5], file.ReadNumberAttributes("a", "many"));
        if (reader == Hdf5Reader.Library) Assert.Equal([1.0, 2.0], file.ReadNumberAttributes("a", "big"));
        else Assert.Contains("big-endian", Assert.ThrowsAny<DataFaultException>(() => file.ReadNumberAttributes("a", "big")).Fault.Found, StringComparison.Ordinal);
        Assert.Equal(-3, file.ReadNumberAttribute("a", "one"));
        Assert.Equal("TRUE", file.ReadTextAttribute("a", "flag"));
        Assert.Equal(["x", "yy"], file.ReadTextAttributes("a", "texts"));
        Assert.Equal("hello", file.ReadTextAttribute("a", "text"));
        if (reader == Hdf5Reader.Managed)
        {
            // the attribute above is big-endian, and the managed library would misread a table in silence
            Assert.Contains("big-endian", Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("table", "shot")).Fault.Found, StringComparison.Ordinal);
            Python.Write(path, "g = h5py.File(path + '2', 'w')\nf.copy('table', g)\ng.close()", "r");
            using IHdf5File again = Hdf5Files.Open(path + "2", new Hdf5Access(reader));
            CheckTable(again);
        }
        else CheckTable(file);
    }

    static void CheckTable(IHdf5File file)
    {
        Assert.Equal([5.0, 6, 7], file.ReadNumbers("table", "shot"));
        Assert.Equal([0.5, 1.5, 2.5], file.ReadNumbers("table", "v"));
        Assert.Equal(["signal", "dark", "signal"], file.ReadLabels("table", "kind"));
        Assert.Equal(["TRUE", "FALSE", "TRUE"], file.ReadLabels("table", "on"));
        Assert.Equal(["A", "B", "A"], file.ReadLabels("table", "state"));
        Assert.Equal(["x", "", "zz"], file.ReadLabels("table", "who"));
        Assert.Equal(["5", "6", "7"], file.ReadLabels("table", "shot"));
        Assert.Equal(["shot", "kind", "on", "v", "state", "who"], file.Describe(100).Single(n => n.Path == "table").Fields);
        Assert.Contains("no field \"absent\"", Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("table", "absent")).Fault.Found, StringComparison.Ordinal);
        Assert.ThrowsAny<DataFaultException>(() => file.ReadNumbers("table", "kind"));
    }

    [SkippableFact]
    public void ReadLabels_WithoutH5py_BothReadersAgreeOnOwnFiles()
    {
        Skip.IfNot(Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        string path = Path.Combine(_folder, "own.h5");
        var data = new short[40, 60];
        for (int k = 0; k < 2400; k++) data[k / 60, k % 60] = (short)(k * 37 % 1001 - 500);
        var tree = new Hdf5Tree();
        tree.Packed("samples", data, [16, 60], ("dt", 1e-5));
        tree.Group("shots").Dataset("kind", Enumerable.Range(0, 40).Select(k => k % 3 == 0 ? "dark" : "signal").ToArray());
        tree.Write(path);
        using IHdf5File one = Hdf5Files.Open(path, new Hdf5Access(Hdf5Reader.Library)), other = Hdf5Files.Open(path, new Hdf5Access(Hdf5Reader.Managed));
        Assert.Equal(one.ReadIntegers("samples", 5, 30), other.ReadIntegers("samples", 5, 30));
        Assert.Equal(one.ReadLabels("shots/kind"), other.ReadLabels("shots/kind"));
        Assert.Equal(one.Shape("samples").RowsPerChunk, other.Shape("samples").RowsPerChunk);
        Assert.Equal(one.Describe(100).Select(n => (n.Path, n.Type)), other.Describe(100).Select(n => (n.Path, n.Type)));
        Assert.StartsWith("HDF5 library 1.", one.Reader, StringComparison.Ordinal);
    }
}
