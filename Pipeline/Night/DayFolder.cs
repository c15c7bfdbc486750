using System.IO.Enumeration;
using System.Security.Cryptography;
using Pipeline.Analysis;
using Pipeline.Configuration;
using Pipeline.Ingest;

namespace Pipeline.Night;

/// <summary>A file of the day that a rule calls a run.</summary>
/// <param name="Name">File name without extension, or as the rule names it.</param>
/// <param name="Path">The file.</param>
/// <param name="Rule">The rule.</param>
/// <param name="Layout">Its layout.</param>
public sealed record RunFile(string Name, string Path, RunRule Rule, ShotFileLayout Layout)
{
    /// <summary>The table of shots beside the file; null where there is none.</summary>
    public string? ShotTablePath => (Layout switch { WideCsvLayout wide => wide.ShotTable, LongCsvLayout list => list.ShotTable, { Shots: { Place: HousekeepingPlace.File, PlaceName: var name } } => name, _ => null })
        is { } table ? System.IO.Path.Combine(System.IO.Path.GetDirectoryName(Path) ?? "", table.Replace("{run}", System.IO.Path.GetFileNameWithoutExtension(Path), StringComparison.Ordinal)) : null;
}

/// <summary>What a day's folder holds.</summary>
public sealed class DayFolder
{
    DayFolder(string path, IReadOnlyList<RunFile> runs, IReadOnlyList<string> notRuns) => (Path, Runs, NotRuns) = (path, runs, notRuns);

    public string Path { get; }
    /// <summary>Name of the folder.</summary>
    public string Name => System.IO.Path.GetFileName(System.IO.Path.TrimEndingDirectorySeparator(System.IO.Path.GetFullPath(Path)));
    /// <summary>In order of name.</summary>
    public IReadOnlyList<RunFile> Runs { get; }
    /// <summary>Files and folders that no rule calls a run, and that no run or prediction needs.</summary>
    public IReadOnlyList<string> NotRuns { get; }

    /// <exception cref="DataFaultException">No such folder, or two runs of one name.</exception>
    public static DayFolder Open(string path, LabConfiguration lab)
    {
        if (!Directory.Exists(path)) throw new DataFaultException(path, "no such folder", "a day's folder with shot files", "check the name");
        string[] files = [.. FolderList.Of(path).Select(f => System.IO.Path.GetFileName(f)).Where(f => f[0] != '.').Order(StringComparer.Ordinal)];
        var predictions = lab.Predictions.Select(p => p.File).ToHashSet(StringComparer.Ordinal);
        RunFile[] runs = [.. files.Where(f => !predictions.Contains(f)).SelectMany(f => RunsOf(path, f, lab)).OrderBy(r => r.Name, StringComparer.Ordinal)];
        foreach (var same in runs.GroupBy(r => r.Name, StringComparer.Ordinal).Where(g => g.Count() > 1))
            throw new DataFaultException(path, $"two runs named {same.Key}: {string.Join(", ", same.Select(r => System.IO.Path.GetFileName(r.Path)))}", "one file a name", "rename one of them");
        foreach (JointRule joint in lab.Joints.Where(j => runs.Any(r => r.Name == j.Name)))
            throw new DataFaultException("night.toml", $"a [[joint]] named {joint.Name}, as a run is", "a name of its own: both would write to one folder", "rename the joint fit");
        var used = runs.SelectMany(r => Companions(r)).ToHashSet(StringComparer.Ordinal);
        return new DayFolder(path, runs, [.. files.Where(f => !used.Contains(f) && !predictions.Contains(f) && !predictions.Any(p => p.StartsWith(f + "/", StringComparison.Ordinal)))]);
    }

    /// <summary>The run of this name, with or without extension.</summary>
    public RunFile Find(string name) => Runs.FirstOrDefault(r => r.Name == name || System.IO.Path.GetFileName(r.Path) == name)
        ?? throw new DataFaultException(Name, $"no run \"{name}\"", Runs.Count == 0 ? "at least one run" : $"one of {string.Join(", ", Runs.Select(r => r.Name))}",
            "check the name, or the [[runs]] rules in night.toml");

    /// <summary>One run by the first rule without a name that fits, and one by each rule with a name.</summary>
    static IEnumerable<RunFile> RunsOf(string folder, string file, LabConfiguration lab)
    {
        bool isFolder = Directory.Exists(System.IO.Path.Combine(folder, file));
        RunRule[] fits = [.. lab.Runs.Where(r => FileSystemName.MatchesSimpleExpression(r.Match, file, ignoreCase: false) && lab.ShotLayouts[r.Layout] is CsvFolderLayout == isFolder)];
        string name = NameOf(folder, file);
        return fits.Where(r => r.Name is null).Take(1).Concat(fits.Where(r => r.Name is not null))
            .Select(r => new RunFile(r.Name?.Replace("{file}", name, StringComparison.Ordinal) ?? name, System.IO.Path.Combine(folder, file), r, lab.ShotLayouts[r.Layout]));
    }

    static string NameOf(string folder, string file) =>
        Directory.Exists(System.IO.Path.Combine(folder, file)) ? file : System.IO.Path.GetFileNameWithoutExtension(file);

    static IEnumerable<string> Companions(RunFile run)
    {
        yield return System.IO.Path.GetFileName(run.Path);
        if (run.ShotTablePath is { } table) yield return System.IO.Path.GetFileName(table);
    }
}

/// <summary>Files by content.</summary>
static class Hashes
{
    /// <exception cref="DataFaultException">The file cannot be read.</exception>
    public static InputFile Of(string folder, string path)
    {
        string name = Path.GetRelativePath(folder, path).Replace('\\', '/');
        try
        {
            using FileStream stream = File.OpenRead(path);
            return new InputFile(name, Convert.ToHexStringLower(SHA256.HashData(stream)));
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(name, $"a file that cannot be read ({e.Message})", "a readable file", "check name and permission");
        }
    }
}
