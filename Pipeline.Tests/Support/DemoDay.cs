namespace Pipeline.Tests.Support;

/// <summary>A copy of the shipped day and configuration in a folder of its own.</summary>
sealed class DemoDay : IDisposable
{
    public DemoDay(params string[] runs)
    {
        Root = Directory.CreateTempSubdirectory("arrivals-night").FullName;
        Day = Path.Combine(Root, "2026-11-23");
        Results = Path.Combine(Root, "results");
        Copy(Path.Combine(Repository.Root, "config"), Path.Combine(Root, "config"), _ => true);
        Copy(Path.Combine(Repository.Root, "sample-data", "2026-11-23"), Day,
            f => f.StartsWith("predictions", StringComparison.Ordinal) || runs.Length == 0 || runs.Any(r => f.StartsWith(r, StringComparison.Ordinal)));
    }

    public string Root { get; }
    public string Day { get; }
    public string Results { get; }

    public void Dispose() => Directory.Delete(Root, recursive: true);

    static void Copy(string from, string to, Func<string, bool> wanted)
    {
        foreach (string file in Directory.GetFiles(from, "*", SearchOption.AllDirectories))
        {
            string relative = Path.GetRelativePath(from, file);
            if (!wanted(relative)) continue;
            string target = Path.Combine(to, relative);
            Directory.CreateDirectory(Path.GetDirectoryName(target)!);
            File.Copy(file, target);
        }
    }
}
