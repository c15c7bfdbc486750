using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>CSV with one row a shot and sample. Samples that are left out are empty counting bins.</summary>
sealed class LongCsvSource : IShotSource
{
    const int BlockSamples = 16_000_000;
    readonly string _path, _name;
    readonly LongCsvLayout _layout;
    readonly ShotInfo[] _shots;

    public LongCsvSource(string path, LongCsvLayout layout, DetectorKind kind)
    {
        (_path, _name, _layout) = (path, Path.GetFileName(path), layout);
        if (kind != DetectorKind.Counting)
            throw new DataFaultException(_name, "a long CSV for an analog detector", "a counting detector: samples that are left out are zero counts", "export one column a shot");
        string table = ShotTable.Beside(path, layout.ShotTable);
        InputFiles = [path, table];
        _shots = ShotTable.ReadCsv(table, layout.Dialect, layout.Shots).ToShots();
        Shape = StatedShape.Of(layout.Axis, layout.Meaning, _shots.Length, kind);
    }

    public RecordShape Shape { get; }
    public IReadOnlyList<string> InputFiles { get; }
    public IReadOnlyList<ShotInfo> Shots => _shots;
    public string Reader => "CsvHelper 34.0.0";

    public void Dispose() { }

    public IEnumerable<ShotBlock> ReadBlocks()
    {
        using var table = new CsvTable(_path, _layout.Dialect);
        int shot = table.Column(_layout.ShotColumn), time = table.Column(_layout.TimeColumn), value = table.Column(_layout.ValueColumn);
        var place = _shots.Select((s, k) => (s.Number, k)).ToDictionary(p => p.Number, p => p.k);
        int rows = Math.Clamp(BlockSamples / Shape.Samples, 1, _shots.Length), first = 0, last = -1;
        var codes = new int[Math.Min(rows, _shots.Length) * Shape.Samples];
        while (table.Next())
        {
            int at = PlaceOf(table, shot, place, last);
            while (at >= first + rows)
            {
                yield return Block(first, rows, codes);
                first += rows;
                codes = new int[Math.Min(rows, _shots.Length - first) * Shape.Samples];
            }
            Put(table, codes, at - first, time, value);
            last = at;
        }
        for (; first < _shots.Length; first += rows)
        {
            yield return Block(first, rows, codes);
            codes = new int[Math.Max(0, Math.Min(rows, _shots.Length - first - rows)) * Shape.Samples];
        }
    }

    ShotBlock Block(int first, int rows, int[] codes) => new(first, _shots[first..Math.Min(first + rows, _shots.Length)], codes);

    /// <summary>Position of the row's shot, which does not fall.</summary>
    int PlaceOf(CsvTable table, int column, Dictionary<long, int> place, int last)
    {
        long number = (long)table.Number(column);
        if (!place.TryGetValue(number, out int at))
            throw new DataFaultException($"{table.Where}, column \"{_layout.ShotColumn}\"", $"shot {number.ToString(CultureInfo.InvariantCulture)}", "a shot of the shot table", "export both files again");
        return at >= last ? at : throw new DataFaultException(table.Where, $"shot {number.ToString(CultureInfo.InvariantCulture)} again", "rows of a shot together, in the order of the shot table", "sort the file by shot");
    }

    void Put(CsvTable table, int[] codes, int row, int time, int value)
    {
        double t = UnitTable.ToSi(table.Number(time), _layout.TimeFactor), place = (t - _layout.Axis.Start) / _layout.Axis.Step, sample = Math.Round(place);
        if (sample < 0 || sample >= Shape.Samples || Math.Abs(place - sample) > 0.01)
            throw new DataFaultException($"{table.Where}, column \"{_layout.TimeColumn}\"", $"time {table.Text(time)}",
                $"a sampling time: {Shape.Samples} from {_layout.Axis.Start:G6} s in steps of {_layout.Axis.Step:G6} s", "correct start, step and samples in the layout");
        if (!table.TryWhole(value, out int count))
            throw new DataFaultException($"{table.Where}, column \"{_layout.ValueColumn}\"", $"\"{table.Text(value)}\"", "a whole number of counts", "export the counts");
        ref int code = ref codes[row * Shape.Samples + (int)sample];
        if (code != 0) throw new DataFaultException(table.Where, "a sample a second time", "each sample of a shot once", "export the file again");
        code = count;
    }
}

/// <summary>The record of a layout that states its sampling times.</summary>
static class StatedShape
{
    public static RecordShape Of(StatedAxis axis, SampleMeaning meaning, int shots, DetectorKind kind) => new()
    {
        Shots = shots, Samples = axis.Samples, TickSeconds = axis.Step, Kind = kind,
        OriginSeconds = meaning == SampleMeaning.Instant ? axis.Start - 0.5 * axis.Step : axis.Start,
    };
}
