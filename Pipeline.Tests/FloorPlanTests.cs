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
    public void Violations_MadeUpSource_AreSeen(string folder, string source, bool broken) =>
        Assert.Equal(broken, Violations(folder, source).Any());

    [Fact]
    public void Files_OfProgramAndTests_HoldOneIdeaEach()
    {
        string[] large = [.. Sources("Pipeline").Concat(Sources("Pipeline.Tests")).Where(f => File.ReadLines(f.Path).Count() > 300).Select(f => f.Path)];
        Assert.True(large.Length == 0, string.Join('\n', large));
    }

    static IEnumerable<string> Violations(string folder, string source)
    {
        if (folder.Length == 0) yield break;
        if (folder != "Hdf5" && source.Contains("using PureHDF", StringComparison.Ordinal)) yield return "uses the HDF5 library outside Hdf5/";
        foreach (Match mention in Mention().Matches(source))
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
}
