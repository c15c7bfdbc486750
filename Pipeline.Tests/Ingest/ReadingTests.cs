using System.Diagnostics;
using Pipeline.Apparatus;
using Pipeline.Hdf5;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Tests.LabFiles;
using Pipeline.Tests.Support;
using SampleDay;

namespace Pipeline.Tests.Ingest;

/// <summary>Files that are whole give what was written.</summary>
public sealed class ReadingTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-read").FullName;
    static readonly RunPlan Plan = new() { Conditions = ["on", "off"], Signal = 6, NoAblation = 3, ProbeBlocked = 2, Dark = 2, Samples = 500, Step = 20e-6 };

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Theory]
    [InlineData("run.h5")]
    [InlineData("run.csv")]
    public void Open_WrittenRun_GivesItsShots(string name)
    {
        IReadOnlyList<Shot> shots = Simulate.Run(new Scene(), Day.Usual, Plan, 4);
        string path = Path.Combine(_folder, name);
        if (name.EndsWith("h5", StringComparison.Ordinal)) Writers.Hdf5(path, Plan, shots);
        else Writers.WideCsv(path, Plan, shots);
        using IShotSource source = ShotFiles.Open(path, name.EndsWith("h5", StringComparison.Ordinal) ? LabFile.Matrix : LabFile.Wide, DetectorKind.Counting);
        Assert.Equal((26, 500, -1e-3, 20e-6), (source.Shape.Shots, source.Shape.Samples, source.Shape.OriginSeconds, source.Shape.TickSeconds));
        var block = source.ReadBlocks().Single();
        for (int k = 0; k < shots.Count; k++)
        {
            Assert.Equal(shots[k].Counts.Select(c => (int)c), block.Codes!.Skip(k * 500).Take(500));
            Assert.Equal((shots[k].Number, shots[k].Condition, (int)shots[k].Kind), ((int)block.Shots[k].Number, block.Shots[k].Condition, (int)block.Shots[k].Kind));
            Assert.Equal(shots[k].ProbeMonitor, block.Shots[k].ProbeMonitor, 5);
        }
    }

    [Fact]
    public void ReadBlocks_SmallBudget_GivesTheSameInSeveralPasses()
    {
        IReadOnlyList<Shot> shots = Simulate.Run(new Scene(), Day.Usual, Plan, 4);
        string path = Path.Combine(_folder, "run.csv");
        Writers.WideCsv(path, Plan, shots);
        using var source = new WideCsvSource(path, (WideCsvLayout)LabFile.Wide, DetectorKind.Counting, budget: 4 * 500);
        var blocks = source.ReadBlocks().ToList();
        Assert.Equal(7, blocks.Count);
        Assert.Equal(shots.SelectMany(s => s.Counts.Select(c => (int)c)), blocks.SelectMany(b => b.Codes!));
    }

    [Fact]
    public void ReadBlocks_SmallHdf5Blocks_GiveTheSameInWholeChunks()
    {
        var plan = Plan with { Signal = 40 };
        IReadOnlyList<Shot> shots = Simulate.Run(new Scene(), Day.Usual, plan, 4);
        string path = Path.Combine(_folder, "run.h5");
        Writers.Hdf5(path, plan, shots);
        using var source = new Hdf5MatrixSource(path, (Hdf5MatrixLayout)LabFile.Matrix, DetectorKind.Counting, blockSamples: 20 * 500);
        var blocks = source.ReadBlocks().ToList();
        // chunks of 16 shots: a block of 20 shots holds one
        Assert.Equal([16, 16, 16, 16, 16, 14], blocks.Select(b => b.Shots.Count));
        Assert.Equal(shots.SelectMany(s => s.Counts.Select(c => (int)c)), blocks.SelectMany(b => b.Codes!));
    }

    [Fact]
    public void Write_SameRunTwice_GivesTheSameBytes()
    {
        foreach (string name in (string[])["a.h5", "b.h5"]) Writers.Hdf5(Path.Combine(_folder, name), Plan, Simulate.Run(new Scene(), Day.Usual, Plan, 4));
        Assert.Equal(File.ReadAllBytes(Path.Combine(_folder, "a.h5")), File.ReadAllBytes(Path.Combine(_folder, "b.h5")));
    }

    [SkippableFact]
    public void Read_PredictionInTwoFormats_IsTheSame()
    {
        var lab = new LabFile("model-L1");
        MoleculeList csv = MoleculeFiles.Read(Path.Combine(lab.Folder, "prediction.csv"), LabFile.Molecules, MoleculeWeighting.Crossings);
        MoleculeList hdf = MoleculeFiles.Read(Path.Combine(lab.Folder, "prediction.h5"), LabFile.Molecules with { Group = "molecules" }, MoleculeWeighting.Crossings);
        Assert.Equal(60_000, csv.Count);
        // the CSV prints eight significant digits
        for (int k = 0; k < csv.Count; k++)
        {
            Assert.Equal(hdf.Time[k], csv.Time[k], 1e-7 * hdf.Time[k]);
            Assert.Equal(hdf.Vz[k], csv.Vz[k], 1e-7 * hdf.Vz[k]);
            Assert.Equal(hdf.Weight[k], csv.Weight[k], 1e-7 * hdf.Weight[k]);
        }
    }

    [SkippableTheory]
    [InlineData("int16", "")]
    [InlineData("uint8", "")]
    [InlineData("uint16", ", chunks=(3, 50), compression=\"gzip\", shuffle=True")]
    [InlineData("int32", ", chunks=(4, 50), compression=\"gzip\", fletcher32=True")]
    [InlineData("int64", ", maxshape=(None, 50), chunks=(2, 50)")]
    [InlineData("float32", ", chunks=(3, 50), compression=\"gzip\"")]
    [InlineData("float64", "")]
    public void ReadRows_WrittenByAnotherLibrary_GivesItsSums(string type, string options)
    {
        const string Python = "/usr/bin/python3";
        Skip.IfNot(File.Exists(Python) && Exit(Python, "import h5py") == 0, "no Python with h5py on this machine");
        string path = Path.Combine(_folder, "other.h5");
        string script = $"import h5py, numpy as np\nf = h5py.File(r'{path}', 'w')\na = (np.arange(10*50).reshape(10, 50) * 7 % 120).astype('{type}')\nf.create_dataset('a', data=a{options})\n"
            + "f['fixed'] = np.array([b'on', b'off', b'on'])\nf.create_dataset('variable', data=['on', 'off', 'on'], dtype=h5py.string_dtype())\nf['a'].attrs['dt'] = 1e-5\nf.close()";
        Assert.Equal(0, Exit(Python, script));
        using IHdf5File file = Hdf5Files.Open(path);
        DatasetShape shape = file.Shape("a");
        Assert.Equal([10, 50], shape.Dimensions);
        double[] rows = shape.Elements == ElementKind.Integer ? [.. file.ReadIntegers("a", 2, 5).Select(v => (double)v)] : file.ReadReals("a", 2, 5);
        Assert.Equal(Enumerable.Range(100, 250).Select(k => (double)(k * 7 % 120)), rows);
        Assert.Equal(["on", "off", "on"], file.ReadLabels("fixed"));
        Assert.Equal(["on", "off", "on"], file.ReadLabels("variable"));
        Assert.Equal(1e-5, file.ReadNumberAttribute("a", "dt"));
    }

    [SkippableTheory]
    [InlineData(">i2")]
    [InlineData(">f4")]
    public void ReadRows_BigEndian_IsRefusedRatherThanMisread(string type)
    {
        const string Python = "/usr/bin/python3";
        Skip.IfNot(File.Exists(Python) && Exit(Python, "import h5py") == 0, "no Python with h5py on this machine");
        string path = Path.Combine(_folder, "big.h5");
        Assert.Equal(0, Exit(Python, $"import h5py, numpy as np\nf = h5py.File(r'{path}', 'w')\nf['a'] = np.arange(20).reshape(2, 10).astype('{type}')\nf.close()"));
        using IHdf5File file = Hdf5Files.Open(path);
        Assert.Throws<DataFaultException>(() => file.Shape("a").Elements == ElementKind.Integer ? file.ReadIntegers("a", 0, 2).Length : file.ReadReals("a", 0, 2).Length);
    }

    [SkippableTheory]
    [InlineData("earliest", 3)]
    [InlineData("latest", 3)]
    [InlineData("latest", 40)]
    public void Open_SoftLinkLoop_IsRefusedAndDoesNotEndTheProgram(string version, int links)
    {
        const string Python = "/usr/bin/python3";
        Skip.IfNot(File.Exists(Python) && Exit(Python, "import h5py") == 0, "no Python with h5py on this machine");
        string path = Path.Combine(_folder, "loop.h5");
        Assert.Equal(0, Exit(Python, $"import h5py\nf = h5py.File(r'{path}', 'w', libver='{version}')\nfor k in range({links}): f['g%d' % k] = [1, 2]\n"
            + "f['fluorescence'] = h5py.SoftLink('/b')\nf['b'] = h5py.SoftLink('/fluorescence')\nf.close()"));
        Assert.Contains("soft links", Assert.Throws<DataFaultException>(() => Hdf5Files.Open(path)).Fault.Found, StringComparison.Ordinal);
    }

    static int Exit(string program, string script)
    {
        using Process process = Process.Start(new ProcessStartInfo(program, ["-c", script]) { RedirectStandardError = true, UseShellExecute = false })!;
        process.WaitForExit();
        return process.ExitCode;
    }
}
