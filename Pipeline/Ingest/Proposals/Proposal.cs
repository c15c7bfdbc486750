namespace Pipeline.Ingest;

/// <summary>A layout that fits a file, as far as the file tells.</summary>
/// <param name="Toml">The layout file.</param>
/// <param name="Roles">What each dataset or column is taken for.</param>
/// <param name="Question">The one thing that the file does not say; null where nothing is open.</param>
public sealed record Proposal(string Toml, IReadOnlyList<string> Roles, string? Question);

/// <summary>What a file holds, and a proposal.</summary>
/// <param name="Tree">Lines that show what is in it.</param>
/// <param name="Proposal">Null where no layout fits.</param>
public sealed record FileSketch(IReadOnlyList<string> Tree, Proposal? Proposal);
