using System.CommandLine;

namespace Pipeline.Commands;

/// <summary>Options that say where configuration and results are.</summary>
sealed class Folders
{
    public Argument<string> Day { get; } = new("DAY") { Description = "folder with a day's shot files" };

    public Option<string?> Config { get; } = new("--config")
    {
        Description = "configuration folder; left out: the nearest folder named config with an apparatus.toml, beside or above the day, then in the current folder",
    };

    public Option<string> Results { get; } = new("--results")
    {
        Description = "folder that receives DAY/RUN/ with the results", DefaultValueFactory = _ => "results",
    };

    public void AddTo(Command command)
    {
        command.Add(Day);
        command.Add(Config);
        command.Add(Results);
    }

    /// <summary>The folder that was named, or the nearest one.</summary>
    /// <exception cref="DataFaultException">There is none.</exception>
    public static string FindConfig(string? named, string near)
    {
        if (named is not null) return named;
        for (string? at = Path.GetFullPath(near); at is not null; at = Path.GetDirectoryName(at))
            if (IsConfig(Path.Combine(at, "config"))) return Path.Combine(at, "config");
        string here = Path.GetFullPath("config");
        return IsConfig(here) ? here : throw new DataFaultException(near, "no folder config with an apparatus.toml in it, beside or above", "a configuration folder", "name it with --config");
    }

    static bool IsConfig(string folder) => File.Exists(Path.Combine(folder, "apparatus.toml"));
}
