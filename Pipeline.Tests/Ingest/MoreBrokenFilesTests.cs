using System.Diagnostics;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Ingest;
using Pipeline.Reduction;

namespace Pipeline.Tests.Ingest;

/// <summary>Damaged input in the layouts beyond the two plain ones.</summary>
public sealed class MoreBrokenFilesTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-broken").FullName;
    static readonly ShotColumns Columns = new() { Number = "shot", Kind = "kind", OnlyCondition = "off", KindLabels = ["signal", "no_ablation", "probe_blocked", "dark"] };
    static readonly StatedAxis Axis = new(-1e-3, 1e-5, 200);

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void Long_EmptyBinsLeftOut_AreZero()
    {
        using IShotSource source = Long("shot,t,n\n0,-1000,2\n0,980,1\n2,0,5\n");
        int[] codes = source.ReadBlocks().Single().Codes!;
        Assert.Equal((2, 1, 5, 8), (codes[0], codes[198], codes[500], codes.Sum()));
    }

    [Theory]
    [InlineData("shot,t,n\n0,0,1\n7,0,1\n", "line 3", "shot 7")]
    [InlineData("shot,t,n\n1,0,1\n0,0,1\n", "line 3", "shot 0 again")]
    [InlineData("shot,t,n\n0,0,1\n0,0,1\n", "line 3", "a second time")]
    [InlineData("shot,t,n\n0,5,1\n", "line 2", "time 5")]
    [InlineData("shot,t,n\n0,1000,1\n", "line 2", "time 1000")]
    [InlineData("shot,t,n\n0,0,1.5\n", "line 2", "1.5")]
    [InlineData("shot,t\n0,0\n", "run.csv", "no column \"n\"")]
    public void Long_Broken_NamesPlaceAndFault(string text, string where, string found) =>
        AssertFault(where, found, () =>
        {
            using IShotSource source = Long(text);
            return source.ReadBlocks().Count();
        });

    [Theory]
    [InlineData("0,signal,../a.csv\n", "t,v\n0,1\n1,2\n", "without folders", "\"../a.csv\"")]
    [InlineData("0,signal,b.csv\n", "t,v\n0,1\n1,2\n", "every trace", "no file \"b.csv\"")]
    [InlineData("0,signal,a.csv\n1,dark,c.csv\n", "t,v\n0,1\n1,2\n", "as in the first trace", "3 samples")]
    [InlineData("0,signal,a.csv\n", "t,v\n0,1\n1,2\n5,2\n", "even steps", "time")]
    [InlineData("0,signal,a.csv\n", "t,v\n0,1\n", "two or more", "1 rows")]
    public void Folder_Broken_NamesPlaceAndFault(string rows, string trace, string expected, string found)
    {
        File.WriteAllText(Path.Combine(_folder, "shots.csv"), "shot,kind,file\n" + rows);
        File.WriteAllText(Path.Combine(_folder, "a.csv"), trace);
        File.WriteAllText(Path.Combine(_folder, "c.csv"), "t,v\n0,1\n1,2\n2,2\n");
        var layout = new CsvFolderLayout { Name = "l", Meaning = SampleMeaning.BinStart, TimeColumn = "t", TimeFactor = 1e-6, ValueColumn = "v", ShotTable = "shots.csv", FileColumn = "file", Shots = Columns };
        Fault fault = AssertFault("", found, () =>
        {
            using IShotSource source = ShotFiles.Open(_folder, layout, DetectorKind.Counting);
            return source.ReadBlocks().Count();
        });
        Assert.Contains(expected, fault.Expected, StringComparison.Ordinal);
    }

    [Fact]
    public void Stamps_Whole_AreBinned()
    {
        using IShotSource source = Stamps([-1e-3, 0.0000051, 0.0000149, 9.95e-4], [0, 0, 1, 2]);
        int[] codes = source.ReadBlocks().Single().Codes!;
        Assert.Equal((1, 1, 1, 1, 4), (codes[0], codes[100], codes[301], codes[599], codes.Sum()));
    }

    [Theory]
    [InlineData(new[] { 0.0, 0.0 }, new[] { 1, 0 }, "stamp 1", "0")]
    [InlineData(new[] { 0.0, 0.0 }, new[] { 0, 3 }, "stamp 1", "3")]
    [InlineData(new[] { 0.0, 1.1e-3 }, new[] { 0, 0 }, "stamp 1", "0.0011")]
    [InlineData(new[] { 0.0, double.NaN }, new[] { 0, 0 }, "stamp 1", "NaN")]
    [InlineData(new[] { 0.0 }, new[] { 0, 0 }, "index", "2 values")]
    public void Stamps_Broken_NamesPlaceAndFault(double[] times, int[] index, string where, string found) =>
        AssertFault(where, found, () =>
        {
            using IShotSource source = Stamps(times, index);
            return source.ReadBlocks().Count();
        });

    [Fact]
    public void Groups_ShortShot_NamesIt()
    {
        var tree = new Hdf5Tree();
        foreach ((string name, int samples) in ((string, int)[])[("s_0", 200), ("s_1", 150)])
            tree.Group(name).Attribute("shot", (double)(name[^1] - '0')).Attribute("kind", "signal").Dataset("x", new int[samples]);
        tree.Write(Path.Combine(_folder, "g.h5"));
        var layout = new Hdf5GroupsLayout { Name = "l", Meaning = SampleMeaning.BinStart, Axis = Axis, Groups = "s_*", Samples = "x", Shots = Columns };
        AssertFault("s_1/x", "[150]", () =>
        {
            using IShotSource source = ShotFiles.Open(Path.Combine(_folder, "g.h5"), layout, DetectorKind.Counting);
            return source.ReadBlocks().Count();
        });
    }

    /// <summary>A cube with one place padded, and with one record half NaN.</summary>
    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Classes_NaN_IsPaddingOnlyThroughout(bool half)
    {
        var cube = new double[1, 3, 200];
        for (int i = half ? 100 : 0; i < 200; i++) cube[0, 2, i] = double.NaN;
        var tree = new Hdf5Tree();
        tree.Dataset("t", Enumerable.Range(0, 200).Select(i => 1e-5 * i).ToArray());
        tree.Group("signal_off").Dataset("x", cube).Dataset("shot", new[,] { { 0.0, 1, half ? 2 : double.NaN } });
        tree.Write(Path.Combine(_folder, "c.h5"));
        var layout = new Hdf5ClassesLayout { Name = "l", Meaning = SampleMeaning.BinStart, Groups = "{kind}_{condition}", Samples = "x", Times = "t", TimeFactor = 1, Shots = Columns with { Kind = "{kind}" } };
        int Read()
        {
            using IShotSource source = ShotFiles.Open(Path.Combine(_folder, "c.h5"), layout, DetectorKind.Counting);
            Assert.Equal(half ? 3 : 2, source.Shots.Count);
            return source.ReadBlocks().Count();
        }
        if (half) AssertFault("shot 2", "100 samples", Read);
        else Assert.Equal(2, Read());
    }

    [Fact]
    public void Wide_HundredThousandColumns_EndsInTime()
    {
        const int Many = 100_000;
        string path = Path.Combine(_folder, "run.csv");
        File.WriteAllText(path, "time," + string.Join(',', Enumerable.Range(0, Many).Select(k => $"s{k}")) + "\n0," + string.Join(',', Enumerable.Repeat("1", Many)) + "\n1," + string.Join(',', Enumerable.Repeat("0", Many)) + "\n");
        File.WriteAllText(Path.Combine(_folder, "run_shots.csv"), "shot,kind\n" + string.Join('\n', Enumerable.Range(0, Many).Select(k => $"{k},signal")) + "\n");
        var layout = new WideCsvLayout { Name = "l", Meaning = SampleMeaning.BinStart, TimeColumn = "time", TimeFactor = 1e-6, ShotColumn = "s{number}", ShotTable = "{run}_shots.csv", Shots = Columns };
        var clock = Stopwatch.StartNew();
        using IShotSource source = ShotFiles.Open(path, layout, DetectorKind.Counting);
        Assert.Equal(Many, source.ReadBlocks().Sum(b => b.Codes!.Sum()));
        Assert.True(clock.Elapsed < TimeSpan.FromSeconds(20), $"{clock.Elapsed}");
    }

    [Fact]
    public void Matrix_DeclaredSizeBeyondTheFile_IsRefusedBeforeMemoryIsAsked()
    {
        string path = Path.Combine(_folder, "huge.h5");
        new Hdf5Tree().Dataset("x", new int[4, 50]).Write(path);
        byte[] bytes = File.ReadAllBytes(path);
        // the dimensions 4 and 50 stand as two 64-bit numbers in the dataspace message: make the first 2^28
        ReadOnlySpan<byte> shape = [4, 0, 0, 0, 0, 0, 0, 0, 50, 0, 0, 0, 0, 0, 0, 0];
        int at = bytes.AsSpan().IndexOf(shape);
        Assert.True(at > 0);
        for (; at >= 0; at = bytes.AsSpan().IndexOf(shape)) bytes[at + 3] = 0x10;
        File.WriteAllBytes(path, bytes);
        long before = GC.GetTotalAllocatedBytes();
        Assert.Throws<DataFaultException>(() =>
        {
            using IHdf5File file = Hdf5Files.Open(path);
            return file.ReadIntegers("x", 0, (int)file.Shape("x").Dimensions[0]).Length;
        });
        Assert.InRange(GC.GetTotalAllocatedBytes() - before, 0, 50_000_000);
    }

    IShotSource Long(string text)
    {
        File.WriteAllText(Path.Combine(_folder, "run.csv"), text);
        File.WriteAllText(Path.Combine(_folder, "run_shots.csv"), "shot,kind\n0,signal\n1,dark\n2,signal\n");
        return ShotFiles.Open(Path.Combine(_folder, "run.csv"), new LongCsvLayout
        {
            Name = "l", Meaning = SampleMeaning.BinStart, Axis = Axis, ShotColumn = "shot", TimeColumn = "t", TimeFactor = 1e-6, ValueColumn = "n", ShotTable = "{run}_shots.csv", Shots = Columns,
        }, DetectorKind.Counting);
    }

    IShotSource Stamps(double[] times, int[] index)
    {
        string path = Path.Combine(_folder, "stamps.h5");
        new Hdf5Tree().Dataset("t", times).Dataset("index", index).Dataset("shot", new[] { 0.0, 1, 2 }).Dataset("kind", new[] { "signal", "dark", "signal" }).Write(path);
        return ShotFiles.Open(path, new Hdf5StampsLayout { Name = "l", Meaning = SampleMeaning.BinStart, Axis = Axis, Times = "t", TimeFactor = 1, ShotIndex = "index", Shots = Columns }, DetectorKind.Counting);
    }

    static Fault AssertFault(string where, string found, Func<int> read)
    {
        Fault fault = Assert.Throws<DataFaultException>(() => read()).Fault;
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(found, fault.Found, StringComparison.Ordinal);
        Assert.NotEmpty(fault.Expected);
        Assert.NotEmpty(fault.Remedy);
        return fault;
    }
}
