using System.Globalization;
using Pipeline.Hdf5;
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

    /// <summary>Housekeeping that an HDF5 file keeps as datasets with one value a shot.</summary>
    public static ShotTable ReadHdf5(IHdf5File file, ShotColumns columns)
    {
        double[]? Optional(string? path) => path is null ? null : file.ReadNumbers(path);
        return new ShotTable(Optional(columns.Number), file.ReadLabels(columns.Kind), columns.Condition is { } condition ? file.ReadLabels(condition) : null,
            Optional(columns.ProbeMonitor), Optional(columns.AblationMonitor), Optional(columns.Detuning));
    }

    /// <summary>A shot table in a CSV file, one row a shot.</summary>
    /// <param name="path">The file.</param>
    /// <param name="dialect">How it is written.</param>
    /// <param name="columns">Names of its columns.</param>
    /// <param name="eachRow">Told of every row, for columns beyond these.</param>
    public static ShotInfo[] ReadCsv(string path, CsvDialect dialect, ShotColumns columns, Action<CsvTable>? eachRow = null)
    {
        using var table = new CsvTable(path, dialect);
        string?[] numeric = [columns.Number, columns.ProbeMonitor, columns.AblationMonitor, columns.Detuning];
        int[] places = [.. numeric.Select(n => n is null ? -1 : table.Column(n))];
        int kind = table.Column(columns.Kind), condition = columns.Condition is null ? -1 : table.Column(columns.Condition);
        var (kinds, conditions) = (new List<string>(), new List<string>());
        var numbers = numeric.Select(_ => new List<double>()).ToArray();
        while (table.Next())
        {
            kinds.Add(table.Text(kind));
            if (condition >= 0) conditions.Add(table.Text(condition));
            for (int k = 0; k < places.Length; k++) if (places[k] >= 0) numbers[k].Add(table.Number(places[k]));
            eachRow?.Invoke(table);
        }
        if (kinds.Count == 0) throw new DataFaultException(Path.GetFileName(path), "no shots", "one row a shot", "export the shot table again");
        double[]? Given(int k) => places[k] < 0 ? null : [.. numbers[k]];
        return new ShotTable(Given(0), [.. kinds], condition < 0 ? null : [.. conditions], Given(1), Given(2), Given(3)).ToShots(Path.GetFileName(path), columns);
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
