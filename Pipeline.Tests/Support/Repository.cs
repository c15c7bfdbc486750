namespace Pipeline.Tests.Support;

/// <summary>Where the tests find what stands beside them.</summary>
static class Repository
{
    /// <summary>The folder that holds Pipeline.sln.</summary>
    public static string Root { get; } = FindRoot();

    /// <summary>Folder of lab files with known truth, or null where this machine has none.</summary>
    public static string? Shared { get; } = FindShared();

    static string FindRoot()
    {
        for (string? at = AppContext.BaseDirectory; at is not null; at = Path.GetDirectoryName(at))
            if (File.Exists(Path.Combine(at, "Pipeline.sln"))) return at;
        throw new InvalidOperationException("Pipeline.sln stands in no folder above the tests");
    }

    static string? FindShared()
    {
        string beside = Path.GetFullPath(Path.Combine(Root, "..", "shared"));
        if (Directory.Exists(beside)) return beside;
        string? named = Environment.GetEnvironmentVariable("ARRIVALS_SHARED");
        return named is not null && Directory.Exists(named) ? named : null;
    }
}
