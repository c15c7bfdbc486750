using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Ingest;
using Pipeline.Reduction;

namespace Pipeline.Tests.LabFiles;

/// <summary>For each lab file the proposed layout, unedited, reads it as the shipped one does; or the one open question is named.</summary>
public class PeekTests
{
    [SkippableTheory]
    [InlineData("free-L1", "arrival.h5")]
    [InlineData("free-L3", "arrival.h5")]
    [InlineData("free-L4", "arrival.csv")]
    [InlineData("free-L5", "arrival.csv")]
    [InlineData("free-L6", "arrival")]
    [InlineData("free-L7", "arrival.h5")]
    [InlineData("free-L8", "arrival.csv")]
    public void Propose_LabFile_ReadsItUnedited(string folder, string file)
    {
        var lab = new LabFile(folder);
        string path = Path.Combine(lab.Folder, file);
        Proposal proposal = FileSketches.Of(path).Proposal!;
        Assert.Null(proposal.Question);
        using IShotSource source = ShotFiles.Open(path, LayoutText.Read(proposal.Toml, "proposed"), DetectorKind.Counting);
        double[] sums = [.. source.ReadBlocks().SelectMany(b => Enumerable.Range(0, b.Shots.Count).Select(k => b.Codes is { } c ? c.Skip(k * b.Samples).Take(b.Samples).Sum() : b.Values!.Skip(k * b.Samples).Take(b.Samples).Sum()))];
        if (folder == "free-L6")
        {
            Assert.Equal(40, sums.Length);
            return;
        }
        double[] truth = Totals();
        ShotInfo[] shots = [.. source.Shots];
        for (int k = 0; k < shots.Length; k++) Assert.Equal(truth[shots[k].Number], sums[k]);
        Assert.Equal(45, shots.Count(s => s.Kind == ShotKind.Signal));
        Assert.All(shots, s => Assert.True(double.IsFinite(s.ProbeMonitor) && double.IsFinite(s.AblationMonitor) && double.IsFinite(s.DetuningReadback)));
    }

    [SkippableFact]
    public void Propose_GroupsWithoutTimes_NamesTheOneOpenQuestion()
    {
        Proposal proposal = FileSketches.Of(Path.Combine(new LabFile("free-L2").Folder, "arrival.h5")).Proposal!;
        Assert.Contains("when does sampling start", proposal.Question, StringComparison.Ordinal);
        // answered, it reads the file
        string answered = proposal.Toml.Replace("start = \"0 s\"", "start = \"-2 ms\"", StringComparison.Ordinal).Replace("step = \"1 us\"", "step = \"10 us\"", StringComparison.Ordinal);
        using IShotSource source = ShotFiles.Open(Path.Combine(new LabFile("free-L2").Folder, "arrival.h5"), LayoutText.Read(answered, "answered"), DetectorKind.Counting);
        Assert.Equal(Totals(), source.ReadBlocks().Select(b => (double)b.Codes!.Sum()));
    }

    /// <summary>Counts of each shot of the run that free-L1 to L5, L7 and L8 hold.</summary>
    static double[] Totals()
    {
        using IShotSource source = ShotFiles.Open(Path.Combine(new LabFile("free-L1").Folder, "arrival.h5"), LabFile.Matrix, DetectorKind.Counting);
        return [.. source.ReadBlocks().SelectMany(b => Enumerable.Range(0, b.Shots.Count).Select(k => (double)b.Codes!.Skip(k * b.Samples).Take(b.Samples).Sum()))];
    }
}
