using System.Globalization;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>Housekeeping columns to <see cref="ShotInfo"/>.</summary>
/// <param name="Number">Shot numbers; null: counted from 0.</param>
/// <param name="Kind">Labels.</param>
/// <param name="Condition">Labels; null: the layout's only condition.</param>
/// <param name="Probe">V; null: none.</param>
/// <param name="Ablation">V; null: none.</param>
/// <param name="Detuning">In the unit of the layout; null: none.</param>
sealed record ShotTable(double[]? Number, string[] Kind, string[]? Condition, double[]? Probe, double[]? Ablation, double[]? Detuning)
{
    /// <summary>All shots in file order.</summary>
    /// <param name="name">File, for faults.</param>
    /// <param name="columns">What the layout says of them.</param>
    /// <param name="shots">Number of shots of the samples, or null where the table alone says it.</param>
    public ShotInfo[] ToShots(string name, ShotColumns columns, int? shots = null)
    {
        int count = shots ?? Kind.Length;
        foreach ((string? column, int? length) in ((string?, int?)[])[(columns.Number, Number?.Length), (columns.Kind, Kind.Length),
            (columns.Condition, Condition?.Length), (columns.ProbeMonitor, Probe?.Length), (columns.AblationMonitor, Ablation?.Length),
            (columns.Detuning, Detuning?.Length)])
            if (length is { } found && found != count)
                throw new DataFaultException($"{name}, {column}", $"{found} values", $"{count}, one for each shot", "the file is damaged, or the layout names the wrong data");
        var infos = new ShotInfo[count];
        for (int k = 0; k < count; k++)
            infos[k] = new ShotInfo(Number is null ? k : (long)Number[k], KindOf(name, columns, k), Condition?[k] ?? columns.OnlyCondition ?? "off",
                Probe?[k] ?? double.NaN, Ablation?[k] ?? double.NaN, (Detuning?[k] ?? double.NaN) * columns.DetuningFactor);
        RefuseDuplicates(name, infos);
        return infos;
    }

    ShotKind KindOf(string name, ShotColumns columns, int shot)
    {
        for (int k = 0; k < columns.KindLabels.Count; k++) if (columns.KindLabels[k] == Kind[shot]) return (ShotKind)k;
        throw new DataFaultException($"{name}, {columns.Kind}, shot {shot.ToString(CultureInfo.InvariantCulture)}", $"kind \"{Kind[shot]}\"",
            $"one of {string.Join(", ", columns.KindLabels)}", "add the label under [kinds] in the layout");
    }

    static void RefuseDuplicates(string name, ShotInfo[] infos)
    {
        var seen = new HashSet<long>();
        foreach (ShotInfo info in infos)
            if (!seen.Add(info.Number))
                throw new DataFaultException(name, $"shot number {info.Number.ToString(CultureInfo.InvariantCulture)} twice", "each once", "remove the repeated shot, or record the run again");
    }
}
