using System.Text.RegularExpressions;
using Pipeline.Tests.Support;

namespace Pipeline.Tests;

/// <summary>The law of the house: which folder may use which. Change a row and the plan in DEVELOPERS.md together.</summary>
public partial class FloorPlanTests
{
    static readonly string[] Pure = ["Quantities", "Numerics", "Statistics", "Apparatus", "Reduction", "Backgrounds", "Response", "Fitting", "Predictions", "Comparison", "Analysis", "Reports"];

    static readonly Dictionary<string, string[]> MayUse = new(StringComparer.Ordinal)
    {
        ["Quantities"] = [],
        ["Numerics"] = Upto("Numerics"),
        ["Statistics"] = Upto("Statistics"),
        ["Apparatus"] = ["Quantities", "Numerics"],
        ["Reduction"] = Upto("Reduction"),
        ["Backgrounds"] = Upto("Backgrounds"),
        ["Response"] = [.. Upto("Reduction"), "Reduction"],
        ["Fitting"] = Upto("Fitting"),
        ["Predictions"] = [.. Upto("Reduction"), "Reduction", "Response"],
        ["Comparison"] = Upto("Comparison"),
        ["Analysis"] = Upto("Analysis"),
        ["Reports"] = Upto("Reports"),
        ["Hdf5"] = [],
        ["Ingest"] = ["Quantities", "Apparatus", "Reduction", "Predictions", "Hdf5"],
        ["Configuration"] = ["Quantities", "Apparatus", "Reduction", "Backgrounds", "Response", "Fitting", "Predictions", "Comparison", "Analysis", "Ingest"],
        ["Results"] = ["Quantities", "Apparatus", "Reduction", "Fitting", "Comparison", "Analysis", "Reports", "Hdf5"],
        ["Night"] = [.. Pure, "Hdf5", "Ingest", "Configuration", "Results"],
        ["Commands"] = [.. Pure, "Hdf5", "Ingest", "Configuration", "Results", "Night"],
    };

    [Fact]
    public void Folders_Sources_UseOnlyWhatTheirRowNames()
    {
        string[] broken = [.. Sources("Pipeline").SelectMany(f => Violations(f.Folder, File.ReadAllText(f.Path)).Select(v => $"{f.Path}: {v}"))];
        Assert.True(broken.Length == 0, string.Join('\n', broken));
    }

    [Fact]
    public void Folders_OfTheProgram_AllHaveARow() =>
        Assert.Equal(MayUse.Keys.Order(StringComparer.Ordinal), Sources("Pipeline").Select(f => f.Folder).Where(f => f.Length > 0).Distinct(StringComparer.Ordinal).Order(StringComparer.Ordinal));

    [Theory]
    [InlineData("Fitting", "using Pipeline.Ingest;", true)]
    [InlineData("Response", "namespace Pipeline.Response; class A { Pipeline.Fitting.Quantity? q; }", true)]
    [InlineData("Ingest", "using PureHDF;", true)]
    [InlineData("Hdf5", "using PureHDF;", false)]
    [InlineData("Fitting", "using Pipeline.Response;", false)]
    [InlineData("Quantities", "using Pipeline;", false)]
    [InlineData("Fitting", "global using static Pipeline.Ingest.ShotFiles;", true)]
    [InlineData("Fitting", "using Q = global::Pipeline.Reports.Page;", true)]
    [InlineData("Response", "namespace Pipeline.Response; class A { Fitting.Quantity? q; }", true)]
    [InlineData("Response", "namespace Pipeline.Response; class A { List<Comparison.Verdict> v; }", true)]
    [InlineData("Apparatus", "namespace Pipeline.Apparatus; class A { void M() => Statistics.Tail.NormalTwoSided(1); }", true)]
    [InlineData("Fitting", "namespace Pipeline.Fitting; class A { double d = Apparatus.Nuisances.Of(s).Count; }", false)]
    [InlineData("Quantities", "using MathNet.Numerics.Distributions; using System.Numerics;", false)]
    [InlineData("Quantities", "class A { void M() => owner.Results.Add(1); }", false)]
    public void Violations_MadeUpSource_AreSeen(string folder, string source, bool broken) =>
        Assert.Equal(broken, Violations(folder, source).Any());

    [Fact]
    public void Files_OfProgramAndTests_HoldOneIdeaEach()
    {
        string[] large = [.. Sources("Pipeline").Concat(Sources("Pipeline.Tests")).Where(f => File.ReadLines(f.Path).Count() > 300).Select(f => f.Path)];
        Assert.True(large.Length == 0, string.Join('\n', large));
    }

    /// <remarks>The law is read by namespaces: a file that declares another folder's would escape it.</remarks>
    [Fact]
    public void Namespaces_OfTheProgram_AreThoseOfTheirFolders()
    {
        string[] strays = [.. Sources("Pipeline").Where(f => IsStray(f.Folder, File.ReadAllText(f.Path))).Select(f => f.Path)];
        Assert.True(strays.Length == 0, string.Join('\n', strays));
    }

    [Theory]
    [InlineData("Fitting", "namespace Pipeline.Fitting;", false)]
    [InlineData("Ingest", "namespace Pipeline.Ingest.Deeper;", false)]
    [InlineData("", "return 0;", false)]
    [InlineData("Fitting", "namespace Pipeline.Reports;", true)]
    [InlineData("Fitting", "namespace Pipeline;", true)]
    [InlineData("Fitting", "namespace Pipeline.FittingToo;", true)]
    [InlineData("", "namespace Pipeline.Fitting;", true)]
    public void IsStray_MadeUpSource_IsSeen(string folder, string source, bool stray) => Assert.Equal(stray, IsStray(folder, source));

    static bool IsStray(string folder, string source)
    {
        string home = folder.Length == 0 ? "Pipeline" : "Pipeline." + folder;
        return Declaration().Matches(source).Select(d => d.Groups[1].Value)
            .Any(name => name != home && (folder.Length == 0 || !name.StartsWith(home + ".", StringComparison.Ordinal)));
    }

    static IEnumerable<string> Violations(string folder, string source)
    {
        if (folder.Length == 0) yield break;
        if (folder != "Hdf5" && source.Contains("using PureHDF", StringComparison.Ordinal)) yield return "uses the HDF5 library outside Hdf5/";
        foreach (Match mention in Mention().Matches(source).Concat(RelativeMention().Matches(source)))
        {
            string other = mention.Groups[1].Value;
            if (other != folder && MayUse.ContainsKey(other) && !MayUse[folder].Contains(other, StringComparer.Ordinal)) yield return $"{folder} uses {other}";
        }
    }

    static string[] Upto(string folder) => [.. Pure.TakeWhile(p => p != folder)];

    static IEnumerable<(string Folder, string Path)> Sources(string project)
    {
        string root = Path.Combine(Repository.Root, project);
        foreach (string path in Directory.GetFiles(root, "*.cs", SearchOption.AllDirectories))
        {
            string[] parts = Path.GetRelativePath(root, path).Split(Path.DirectorySeparatorChar);
            if (parts[0] is "bin" or "obj") continue;
            yield return (parts.Length > 1 ? parts[0] : "", path);
        }
    }

    [GeneratedRegex(@"\bPipeline\.([A-Z]\w+)", RegexOptions.None, matchTimeoutMilliseconds: 10_000)]
    private static partial Regex Mention();

    /// <summary>Inside a namespace Pipeline.X the compiler finds Pipeline.Y.Type by Y.Type alone; a member named like a folder has an owner
    /// and a point before it.</summary>
    [GeneratedRegex(@"(?<![\w.])([A-Z]\w+)\s*\.\s*[A-Z]\w+", RegexOptions.None, matchTimeoutMilliseconds: 10_000)]
    private static partial Regex RelativeMention();

    [GeneratedRegex(@"^\s*namespace\s+([\w.]+)", RegexOptions.Multiline, matchTimeoutMilliseconds: 10_000)]
    private static partial Regex Declaration();
}
