using System.Globalization;
using Pipeline.Hdf5;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>Housekeeping columns to <see cref="ShotInfo"/>.</summary>
/// <param name="Name">File, for faults.</param>
/// <param name="Columns">What the layout says of them.</param>
/// <param name="Numbers">In the order of <see cref="ShotColumns.Numeric"/>; null: none.</param>
/// <param name="Labels">In the order of <see cref="ShotColumns.Labels"/>; null: none.</param>
sealed record ShotTable(string Name, ShotColumns Columns, IReadOnlyList<double[]?> Numbers, IReadOnlyList<string[]?> Labels)
{
    /// <summary>All shots in file order. Places at the end whose labels are empty were never filled, and are left out.</summary>
    /// <param name="shots">Number of shots of the samples, or null where the table alone says it.</param>
    /// <param name="repeats">Whether a number may come twice: later shots of it are marked as repeated. Else that is a fault.</param>
    public ShotInfo[] ToShots(int? shots = null, bool repeats = false)
    {
        int count = shots ?? Labels.Concat<Array?>(Numbers).Max(c => c?.Length ?? 0);
        CheckLengths(count);
        for (; count > 0 && IsUnfilled(count - 1); count--) { }
        var infos = new ShotInfo[count];
        var seen = new HashSet<long>();
        for (int k = 0; k < count; k++)
        {
            long number = Numbers[0] is { } numbers ? (long)numbers[k] : k;
            bool again = !seen.Add(number);
            if (again && !repeats)
                throw new DataFaultException(Name, $"shot number {number.ToString(CultureInfo.InvariantCulture)} twice", "each once", "remove the repeated shot, or record the run again");
            infos[k] = new ShotInfo(number, KindOf(k), ConditionOf(k), Numbers[1]?[k] ?? double.NaN, Numbers[2]?[k] ?? double.NaN, (Numbers[3]?[k] ?? double.NaN) * Columns.DetuningFactor) { Repeated = again, Point = Numbers[4] is { } points ? (int)points[k] : null };
        }
        return count > 0 ? infos : throw new DataFaultException(Name, "no shots", "one row a shot", "record the run again, or export the shot table again");
    }

    /// <summary>The first shots, where columns were made larger beforehand; shorter columns stay as they are.</summary>
    public ShotTable UpTo(int shots) => this with { Numbers = [.. Numbers.Select(c => c?.Length > shots ? c[..shots] : c)], Labels = [.. Labels.Select(c => c?.Length > shots ? c[..shots] : c)] };

    /// <summary>Housekeeping of an HDF5 file.</summary>
    /// <param name="file">The file.</param>
    /// <param name="path">Its path, for a CSV file beside it.</param>
    /// <param name="columns">Where it stands.</param>
    public static ShotTable ReadHdf5(IHdf5File file, string path, ShotColumns columns)
    {
        string name = Path.GetFileName(path), place = columns.PlaceName ?? "";
        if (columns.Place == HousekeepingPlace.File) return ReadCsv(Beside(path, place), columns.Dialect, columns);
        double[]? Number(string? column) => column is null ? null : columns.Place switch
        {
            HousekeepingPlace.Table => file.ReadNumbers(place, column),
            HousekeepingPlace.Attributes => file.ReadNumberAttributes(place, column),
            _ => file.ReadNumbers(column),
        };
        string[]? Label(string? column) => column is null ? null : columns.Place switch
        {
            HousekeepingPlace.Table => file.ReadLabels(place, column),
            HousekeepingPlace.Attributes => file.ReadTextAttributes(place, column),
            _ => file.ReadLabels(column),
        };
        return new ShotTable(name, columns, [.. columns.Numeric.Select(Number)], [.. columns.Labels.Select(Label)]);
    }

    /// <summary>A shot table in a CSV file, one row a shot.</summary>
    /// <param name="path">The file.</param>
    /// <param name="dialect">How it is written.</param>
    /// <param name="columns">Names of its columns.</param>
    /// <param name="eachRow">Told of every row, for columns beyond these.</param>
    public static ShotTable ReadCsv(string path, CsvDialect dialect, ShotColumns columns, Action<CsvTable>? eachRow = null)
    {
        using var table = new CsvTable(path, dialect);
        int[] numeric = [.. columns.Numeric.Select(n => n is null ? -1 : table.Column(n))], text = [.. columns.Labels.Select(n => n is null ? -1 : table.Column(n))];
        List<double>[] numbers = [.. numeric.Select(_ => new List<double>())];
        List<string>[] labels = [.. text.Select(_ => new List<string>())];
        int rows = 0;
        for (; table.Next(); rows++)
        {
            for (int k = 0; k < text.Length; k++) if (text[k] >= 0) labels[k].Add(table.Text(text[k]));
            for (int k = 0; k < numeric.Length; k++) if (numeric[k] >= 0) numbers[k].Add(table.Number(numeric[k]));
            eachRow?.Invoke(table);
        }
        if (rows == 0) throw new DataFaultException(Path.GetFileName(path), "no shots", "one row a shot", "export the shot table again");
        return new ShotTable(Path.GetFileName(path), columns, [.. numeric.Select((place, k) => place < 0 ? null : numbers[k].ToArray())], [.. text.Select((place, k) => place < 0 ? null : labels[k].ToArray())]);
    }

    /// <summary>A shot table beside a run file; {run} stands for its name without extension.</summary>
    public static string Beside(string path, string table) =>
        Path.Combine(Path.GetDirectoryName(path) ?? "", table.Replace("{run}", Path.GetFileNameWithoutExtension(path), StringComparison.Ordinal));

    /// <summary>A single attribute holds for all shots; any other column has one value for each.</summary>
    void CheckLengths(int count)
    {
        foreach ((string? column, Array? values) in Columns.Numeric.Zip<string?, Array?>(Numbers).Concat(Columns.Labels.Zip<string?, Array?>(Labels)))
            if (values is not null && values.Length != count && !IsForAll(values))
                throw new DataFaultException($"{Name}, {column}", $"{values.Length} values", $"{count}, one for each shot", "the file is damaged, or the layout names the wrong data");
    }

    bool IsForAll(Array values) => Columns.Place == HousekeepingPlace.Attributes && values.Length == 1;

    string? Label(int column, int shot) => Labels[column] is { } labels ? labels[IsForAll(labels) ? 0 : shot] : null;

    /// <summary>A shot that was taken has a kind; a place that was made beforehand and never filled has none.</summary>
    bool IsUnfilled(int shot) => Columns.Kind is not null && Label(0, shot) is "" && Label(3, shot) is null or "";

    ShotKind KindOf(int shot)
    {
        if (Columns.Kind is null) return (Truth(1, shot), Truth(2, shot)) switch { (true, true) => ShotKind.Signal, (true, false) => ShotKind.NoAblation, (false, true) => ShotKind.ProbeBlocked, _ => ShotKind.Dark };
        string label = Label(0, shot)!;
        for (int k = 0; k < Columns.KindLabels.Count; k++) if (Columns.KindLabels[k] == label) return (ShotKind)k;
        throw new DataFaultException($"{Name}, {Columns.Kind}, shot {shot.ToString(CultureInfo.InvariantCulture)}", $"kind \"{label}\"",
            $"one of {string.Join(", ", Columns.KindLabels)}", "add the label under [kinds] in the layout");
    }

    string ConditionOf(int shot)
    {
        string label = Label(3, shot) ?? Columns.OnlyCondition ?? "off";
        return Columns.ConditionNames.GetValueOrDefault(label, label);
    }

    bool Truth(int column, int shot)
    {
        string label = Label(column, shot)!;
        return label.ToUpperInvariant() switch
        {
            "TRUE" or "1" or "ON" or "YES" or "OPEN" => true,
            "FALSE" or "0" or "OFF" or "NO" or "CLOSED" => false,
            _ => throw new DataFaultException($"{Name}, {Columns.Labels[column]}, shot {shot.ToString(CultureInfo.InvariantCulture)}", $"\"{label}\"", "true or false, 1 or 0, on or off, yes or no, open or closed", "use kind in the layout instead"),
        };
    }
}
