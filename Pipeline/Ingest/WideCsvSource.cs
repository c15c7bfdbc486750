using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>CSV with one row a time and one column a shot. The file is read once for each block of shots that fits in memory.</summary>
sealed class WideCsvSource : IShotSource
{
    /// <summary>Samples held at a time; 128 MB as 32-bit integers.</summary>
    const int DefaultBudget = 32_000_000;
    readonly string _path, _name;
    readonly WideCsvLayout _layout;
    readonly int _budget;
    readonly ShotInfo[] _shots;
    readonly int[] _columns;
    readonly bool _whole;

    public WideCsvSource(string path, WideCsvLayout layout, DetectorKind kind, int budget = DefaultBudget)
    {
        (_path, _name, _layout, _budget) = (path, Path.GetFileName(path), layout, budget);
        string tablePath = ShotTable.Beside(path, layout.ShotTable);
        InputFiles = [path, tablePath];
        _shots = ShotTable.ReadCsv(tablePath, layout.Dialect, layout.Shots).ToShots();
        using (CsvTable table = Open()) _columns = ColumnsOf(table);
        TimeScan scan = Scan();
        _whole = scan.Whole;
        Shape = new RecordShape
        {
            Shots = _shots.Length, Samples = scan.Samples, TickSeconds = scan.Step,
            OriginSeconds = layout.Meaning == SampleMeaning.Instant ? scan.Start - 0.5 * scan.Step : scan.Start, Kind = kind,
            Scale = layout.Scale, Offset = layout.Offset, LowestCode = layout.LowestCode, HighestCode = layout.HighestCode,
        };
    }

    public RecordShape Shape { get; }
    public IReadOnlyList<string> InputFiles { get; }
    public IReadOnlyList<ShotInfo> Shots => _shots;
    public string Reader => "CsvHelper 34.0.0";

    public void Dispose() { }

    public IEnumerable<ShotBlock> ReadBlocks()
    {
        int rows = Math.Max(1, _budget / Shape.Samples);
        for (int first = 0; first < _shots.Length; first += rows)
        {
            int count = Math.Min(rows, _shots.Length - first);
            ShotInfo[] infos = _shots[first..(first + count)];
            yield return _whole ? new ShotBlock(first, infos, ReadCodes(first, count)) : new ShotBlock(first, infos, ReadValues(first, count));
        }
    }

    int[] ReadCodes(int first, int count)
    {
        var codes = new int[count * Shape.Samples];
        using CsvTable table = Open();
        for (int i = 0; table.Next(); i++)
            for (int k = 0; k < count; k++)
                if (!table.TryWhole(_columns[first + k], out codes[k * Shape.Samples + i])) throw Changed();
        return codes;
    }

    double[] ReadValues(int first, int count)
    {
        var values = new double[count * Shape.Samples];
        using CsvTable table = Open();
        for (int i = 0; table.Next(); i++)
            for (int k = 0; k < count; k++) values[k * Shape.Samples + i] = table.Number(_columns[first + k]);
        return values;
    }

    CsvTable Open() => new(_path, _layout.Dialect);

    DataFaultException Changed() => new(_name, "a file that changes while it is read", "a finished file", "wait until it is written");

    /// <summary>[shots] column of each shot; a column that no shot names is a fault, so that nothing is left out unsaid.</summary>
    int[] ColumnsOf(CsvTable table)
    {
        var place = new Dictionary<string, int>(StringComparer.Ordinal);
        for (int k = 0; k < table.Headers.Count; k++)
            if (!place.TryAdd(table.Headers[k], k))
                throw new DataFaultException(_name, $"two columns \"{table.Headers[k]}\"", "one a shot", "export the file again");
        int[] columns = [.. _shots.Select(s =>
        {
            string header = _layout.ShotColumn.Replace("{number}", s.Number.ToString(CultureInfo.InvariantCulture), StringComparison.Ordinal);
            return place.TryGetValue(header, out int k) ? k : throw new DataFaultException(_name, $"no column \"{header}\"",
                "a column for each shot of the shot table", "export both files again, or correct samples.shot in the layout");
        })];
        if (table.Headers.Count != columns.Length + 1)
            throw new DataFaultException(_name, $"{table.Headers.Count - 1} columns beside the time", $"{columns.Length}, the shots of the shot table",
                "export both files again");
        return columns;
    }

    readonly record struct TimeScan(int Samples, double Start, double Step, bool Whole);

    /// <summary>Reads the time column, and whether every sample is a whole number.</summary>
    TimeScan Scan()
    {
        using CsvTable table = Open();
        int time = table.Column(_layout.TimeColumn);
        var times = new List<double>();
        bool whole = true;
        while (table.Next())
        {
            double t = table.Number(time);
            if (times.Count > 0 && !(t > times[^1]))
                throw new DataFaultException($"{table.Where}, column \"{_layout.TimeColumn}\"", $"time {t.ToString(CultureInfo.InvariantCulture)} after {times[^1].ToString(CultureInfo.InvariantCulture)}", "rising times", "export the file again");
            times.Add(t);
            for (int k = 0; whole && k < _columns.Length; k++) whole = table.TryWhole(_columns[k], out _);
        }
        double step = EvenTimes.Step($"{_name}, column \"{_layout.TimeColumn}\"", times);
        return new TimeScan(times.Count, UnitTable.ToSi(times[0], _layout.TimeFactor), UnitTable.ToSi(step, _layout.TimeFactor), whole);
    }
}
