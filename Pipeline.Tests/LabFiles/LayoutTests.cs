using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Hdf5;
using Pipeline.Ingest;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.LabFiles;

/// <summary>The same run in every layout that is shipped.</summary>
public class LayoutTests
{
    static readonly LabConfiguration Shipped = ConfigurationReader.Read(Path.Combine(Repository.Root, "config"));

    [SkippableTheory]
    [InlineData("free-L2", "arrival.h5", "hdf5-groups")]
    [InlineData("free-L3", "arrival.h5", "hdf5-classes")]
    [InlineData("free-L4", "arrival.csv", "csv-wide")]
    [InlineData("free-L5", "arrival.csv", "csv-long")]
    [InlineData("free-L7", "arrival.h5", "hdf5-stamps")]
    [InlineData("free-L8", "arrival.csv", "csv-wide-comma")]
    public void Reduce_SameRunInAnotherLayout_IsTheSameBitForBit(string folder, string file, string layout)
    {
        BinnedRun matrix = Reduce("free-L1", "arrival.h5", "hdf5-matrix"), other = Reduce(folder, file, layout);
        Assert.Equal(matrix.Axis.OriginSeconds, other.Axis.OriginSeconds);
        Assert.Equal(matrix.Axis.TickSeconds, other.Axis.TickSeconds);
        Assert.Equal(matrix.Axis.Edges, other.Axis.Edges);
        Assert.Equal(matrix.Cuts.Select(c => (c.Reason, string.Join(',', c.Numbers))), other.Cuts.Select(c => (c.Reason, string.Join(',', c.Numbers))));
        Assert.Equal(matrix.Groups.Select(g => (g.Condition, g.Kind, g.Shots)), other.Groups.Select(g => (g.Condition, g.Kind, g.Shots)));
        foreach ((ShotGroup a, ShotGroup b) in matrix.Groups.Zip(other.Groups))
        {
            Assert.Equal(a.FullSum, b.FullSum);
            Assert.Equal(a.BlockSums, b.BlockSums);
            Assert.Equal(a.BlockProbeMonitor.Sum(), b.BlockProbeMonitor.Sum(), 9);
        }
    }

    [SkippableFact]
    public void Reduce_FolderOfTraces_GivesTrueNumberAndMeanVelocity()
    {
        var lab = new LabFile("free-L6");
        AnalysisSettings settings = LabFile.Settings();
        BinnedRun run = Reduce("free-L6", "arrival", "csv-folder");
        Assert.Equal(40, run.ShotsRead);
        var fit = RunAnalysis.Fit(run, "arrival", lab.Setup(), settings).Single();
        double number = lab.Truth.GetProperty("off").GetProperty("number_per_shot_expected").GetDouble(), mean = lab.Truth.GetProperty("off").GetProperty("mean_velocity_m_per_s").GetDouble();
        Assert.InRange(fit.Number.Value, number - 3 * fit.Number.Total, number + 3 * fit.Number.Total);
        Assert.InRange(fit.Mean.Value, mean - 3 * fit.Mean.Total, mean + 3 * fit.Mean.Total);
    }

    [SkippableTheory]
    [InlineData("free-L1", "hdf5-matrix")]
    [InlineData("free-L2", "hdf5-groups")]
    [InlineData("free-L3", "hdf5-classes")]
    [InlineData("free-L7", "hdf5-stamps")]
    [InlineData("model-L1", "hdf5-matrix")]
    [InlineData("analog-L1", "hdf5-matrix")]
    public void Reduce_BothHdf5Readers_GiveTheSameBitForBit(string folder, string layout)
    {
        Skip.IfNot(Hdf5Files.HasLibrary, "no HDF5 C library on this machine");
        BinnedRun one = Reduce(folder, "arrival.h5", layout, Hdf5Reader.Library), other = Reduce(folder, "arrival.h5", layout, Hdf5Reader.Managed);
        Assert.Equal(one.Groups.Count, other.Groups.Count);
        foreach ((ShotGroup a, ShotGroup b) in one.Groups.Zip(other.Groups))
        {
            Assert.Equal((a.Condition, a.Kind, a.Shots), (b.Condition, b.Kind, b.Shots));
            Assert.Equal(a.FullSum, b.FullSum);
            Assert.Equal(a.BlockProbeMonitor, b.BlockProbeMonitor);
        }
    }

    static BinnedRun Reduce(string folder, string file, string layout, Hdf5Reader reader = Hdf5Reader.Best)
    {
        var lab = new LabFile(folder);
        using IShotSource source = ShotFiles.Open(Path.Combine(lab.Folder, file), Shipped.ShotLayouts[layout], lab.Setup().Detector.Kind, new Hdf5Access(reader));
        BinnedRun run = Reducer.Reduce(source.Shape, source.Shots, source.ReadBlocks(), lab.Setup().Detector, LabFile.Settings().Reduction);
        return run;
    }
}
