using Pipeline.Ingest;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>[shots], [kinds] and [conditions] of a layout.</summary>
static class ShotColumnsReader
{
    public static ShotColumns Read(TomlTable root)
    {
        TomlTable shots = root.Table("shots");
        TomlTable? detuning = shots.OptionalTable("detuning");
        string? kind = shots.OptionalText("kind"), probe = shots.OptionalText("probe_on"), ablation = shots.OptionalText("ablation_on");
        if (kind is null ? probe is null || ablation is null : probe is not null || ablation is not null)
            throw shots.Refuse("kind", kind is null ? "neither kind nor both of probe_on and ablation_on" : "kind beside probe_on or ablation_on", "kind, or probe_on and ablation_on");
        string? condition = shots.OptionalText("condition"), only = shots.OptionalText("only_condition");
        if (condition is null == only is null)
            throw shots.Refuse("condition", condition is null ? "neither condition nor only_condition" : "both condition and only_condition", "one of them");
        (HousekeepingPlace place, string? name) = PlaceOf(shots);
        var columns = new ShotColumns
        {
            Place = place, PlaceName = name, Dialect = LayoutReader.Dialect(root), Number = shots.OptionalText("number"), Point = shots.OptionalText("point"), Kind = kind, ProbeOn = probe, AblationOn = ablation,
            Condition = condition, OnlyCondition = only, ConditionNames = ConditionNames(root), ProbeMonitor = shots.OptionalText("probe_monitor"),
            AblationMonitor = shots.OptionalText("ablation_monitor"), Detuning = detuning?.Text("column"), DetuningFactor = detuning is null ? 1 : LayoutReader.UnitOf(detuning, Dimension.Frequency),
            KindLabels = kind is null ? [] : KindLabels(root.Table("kinds")),
        };
        detuning?.RefuseUnknown();
        shots.RefuseUnknown();
        return columns;
    }

    /// <summary>A shot table beside the run.</summary>
    public static string TableName(TomlTable shots)
    {
        string file = shots.Text("file");
        return file.Split('/', '\\').Contains("..") || Path.IsPathRooted(file) ? throw shots.Refuse("file", $"\"{file}\"", "a file beside the run") : file;
    }

    static (HousekeepingPlace, string?) PlaceOf(TomlTable shots)
    {
        string[] named = [.. ((string[])["file", "table", "attributes_of"]).Where(shots.Has)];
        if (named.Length > 1) throw shots.Refuse(named[1], $"{string.Join(" and ", named)}", "one place for the housekeeping");
        return named switch
        {
            ["file"] => (HousekeepingPlace.File, TableName(shots)),
            ["table"] => (HousekeepingPlace.Table, shots.Text("table")),
            ["attributes_of"] => (HousekeepingPlace.Attributes, shots.Text("attributes_of")),
            _ => (HousekeepingPlace.Datasets, null),
        };
    }

    static string[] KindLabels(TomlTable kinds)
    {
        string[] labels = [kinds.Text("signal"), kinds.Text("no_ablation"), kinds.Text("probe_blocked"), kinds.Text("dark")];
        kinds.RefuseUnknown();
        return labels.Distinct(StringComparer.Ordinal).Count() == labels.Length ? labels
            : throw kinds.Refuse("signal", "one label for two kinds", "four different labels");
    }

    static Dictionary<string, string> ConditionNames(TomlTable root)
    {
        var names = new Dictionary<string, string>(StringComparer.Ordinal);
        if (root.OptionalTable("conditions") is not { } table) return names;
        foreach (string label in table.Keys.ToArray()) names[label] = table.Text(label);
        return names;
    }
}
