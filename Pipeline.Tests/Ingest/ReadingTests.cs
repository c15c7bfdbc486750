using Pipeline.Apparatus;
using Pipeline.Ingest;
using Pipeline.Predictions;
using Pipeline.Tests.LabFiles;
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
}
