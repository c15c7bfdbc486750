namespace Pipeline.Ingest;

/// <summary>What a name probably means. Names are compared without case; a role that no name fits stays open.</summary>
sealed class Roles
{
    /// <summary>Labels of the four kinds that are known without asking.</summary>
    public static readonly string[] KnownKinds = ["signal", "no_ablation", "probe_blocked", "dark"];

    readonly Dictionary<string, string> _found = new(StringComparer.Ordinal);

    /// <param name="names">Columns, datasets or attributes.</param>
    public Roles(IEnumerable<string> names)
    {
        foreach (string name in names)
        {
            string n = name.ToUpperInvariant();
            bool monitor = n.Contains("MONITOR", StringComparison.Ordinal) || n.Contains("POWER", StringComparison.Ordinal) || n.Contains("ENERGY", StringComparison.Ordinal);
            if (n.Contains("PROBE", StringComparison.Ordinal) && monitor) _found.TryAdd("probe_monitor", name);
            else if (n.Contains("ABLATION", StringComparison.Ordinal) && monitor) _found.TryAdd("ablation_monitor", name);
            else if (n.Contains("PROBE", StringComparison.Ordinal) && IsSwitch(n)) _found.TryAdd("probe_on", name);
            else if (n.Contains("ABLATION", StringComparison.Ordinal) && IsSwitch(n)) _found.TryAdd("ablation_on", name);
            else if (n is "POINT" or "SCAN_POINT" || n.EndsWith("/POINT", StringComparison.Ordinal) || n.EndsWith("/SCAN_POINT", StringComparison.Ordinal)) _found.TryAdd("point", name);
            else if (n.Contains("DETUNING", StringComparison.Ordinal)) _found.TryAdd("detuning", name);
            else if (n.EndsWith("KIND", StringComparison.Ordinal) || n.EndsWith("SHOT_TYPE", StringComparison.Ordinal)) _found.TryAdd("kind", name);
            else if (n.Contains("DECELERATOR", StringComparison.Ordinal) || n.EndsWith("CONDITION", StringComparison.Ordinal)) _found.TryAdd("condition", name);
            else if (n is "SHOT" or "SHOT_NUMBER" or "NUMBER" || n.EndsWith("/SHOT", StringComparison.Ordinal) || n.EndsWith("/SHOT_NUMBER", StringComparison.Ordinal)) _found.TryAdd("number", name);
        }
    }

    static bool IsSwitch(string name) => name.EndsWith("ON", StringComparison.Ordinal) || name.EndsWith("OPEN", StringComparison.Ordinal) || name.EndsWith("FIRED", StringComparison.Ordinal);

    /// <summary>Whether the kind of shot follows from two switches.</summary>
    public bool HasSwitches => Of("kind") is null && Of("probe_on") is not null && Of("ablation_on") is not null;

    public string? Of(string role) => _found.GetValueOrDefault(role);

    /// <summary>The [shots] table; kind and condition may be given where they do not stand in a column.</summary>
    public string ShotsTable(string? kind = null, string? condition = null)
    {
        var lines = new List<string> { "[shots]" };
        void Add(string key, string? value)
        {
            if (value is not null) lines.Add($"{key} = {TomlText.Quote(value)}");
        }
        Add("number", Of("number"));
        if (HasSwitches && kind is null)
        {
            Add("probe_on", Of("probe_on"));
            Add("ablation_on", Of("ablation_on"));
        }
        else Add("kind", kind ?? Of("kind") ?? "?");
        string? where = condition ?? Of("condition");
        if (where is null) lines.Add("only_condition = \"off\"");
        else Add("condition", where);
        Add("point", Of("point"));
        Add("probe_monitor", Of("probe_monitor"));
        Add("ablation_monitor", Of("ablation_monitor"));
        if (Of("detuning") is { } detuning) lines.Add($"detuning = {{ column = {TomlText.Quote(detuning)}, unit = \"{FrequencyUnit(detuning)}\" }}");
        return string.Join('\n', lines) + "\n";
    }

    /// <summary>What was found, in words.</summary>
    public IEnumerable<string> Words => _found.OrderBy(f => f.Key, StringComparer.Ordinal).Select(f => $"{f.Value}: {f.Key.Replace('_', ' ')}");

    /// <summary>The [kinds] table, and the labels that are not known.</summary>
    public static (string Table, string? Question) Kinds(IEnumerable<string> labels)
    {
        string[] unknown = [.. labels.Distinct(StringComparer.Ordinal).Where(l => !KnownKinds.Contains(l, StringComparer.Ordinal)).Order(StringComparer.Ordinal)];
        string table = "[kinds]\n" + string.Join('\n', KnownKinds.Select(k => $"{k} = \"{k}\"")) + "\n";
        return (table, unknown.Length == 0 ? null : $"which kind of shot are {string.Join(", ", unknown)}? Put the file's own words under [kinds]");
    }

    /// <summary>The [conditions] table for labels that are a boolean's.</summary>
    public static string Conditions(IEnumerable<string> labels) =>
        labels.All(l => l is "TRUE" or "FALSE") && labels.Any() ? "\n[conditions]\nTRUE = \"on\"\nFALSE = \"off\"\n" : "";

    static string FrequencyUnit(string name) => name.ToUpperInvariant() switch
    {
        var n when n.EndsWith("GHZ", StringComparison.Ordinal) => "GHz",
        var n when n.EndsWith("MHZ", StringComparison.Ordinal) => "MHz",
        var n when n.EndsWith("KHZ", StringComparison.Ordinal) => "kHz",
        _ => "Hz",
    };
}

/// <summary>Strings in TOML.</summary>
static class TomlText
{
    public static string Quote(string text) => "\"" + text.Replace("\\", "\\\\", StringComparison.Ordinal).Replace("\"", "\\\"", StringComparison.Ordinal) + "\"";

    /// <summary>A time with unit, in microseconds where that is round.</summary>
    public static string Time(double seconds) => FormattableString.Invariant($"\"{Math.Round(seconds * 1e6, 6)} us\"");
}
