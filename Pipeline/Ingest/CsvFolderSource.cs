using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Ingest;

/// <summary>A folder with one CSV a shot and a table of shots.</summary>
sealed class CsvFolderSource : IShotSource
{
    readonly CsvFolderLayout _layout;
    readonly string[] _traces;
    readonly ShotInfo[] _shots;

    public CsvFolderSource(string path, CsvFolderLayout layout, DetectorKind kind)
    {
        _layout = layout;
        string table = Path.Combine(path, layout.ShotTable);
        var files = new List<string>();
        _shots = ShotTable.ReadCsv(table, new CsvDialect(layout.Dialect.Separator, layout.Dialect.Comment, layout.Dialect.Decimal, layout.Dialect.Latin1), layout.Shots,
            row => files.Add(Inside(path, row.Text(row.Column(layout.FileColumn))))).ToShots(repeats: true);
        _traces = [.. files];
        InputFiles = [table, .. _traces];
        (double[] times, _, bool whole) = ReadTrace(_traces[0]);
        double step = UnitTable.ToSi(EvenTimes.Step(Path.GetFileName(_traces[0]), times), layout.TimeFactor), start = UnitTable.ToSi(times[0], layout.TimeFactor);
        Shape = StatedShape.Of(new StatedAxis(start, step, times.Length), layout.Meaning, _shots.Length, kind);
        Whole = whole;
    }

    public RecordShape Shape { get; }
    public IReadOnlyList<string> InputFiles { get; }
    public IReadOnlyList<ShotInfo> Shots => _shots;
    public string Reader => "CsvHelper 34.0.0";

    /// <summary>Whether the first trace holds whole numbers; then all must.</summary>
    bool Whole { get; }

    public void Dispose() { }

    public IEnumerable<ShotBlock> ReadBlocks()
    {
        for (int k = 0; k < _shots.Length; k++)
        {
            (double[] times, double[] values, bool whole) = ReadTrace(_traces[k]);
            Check(_traces[k], times, whole);
            yield return Whole ? new ShotBlock(k, [_shots[k]], Array.ConvertAll(values, v => (int)v)) : new ShotBlock(k, [_shots[k]], values);
        }
    }

    void Check(string path, double[] times, bool whole)
    {
        string name = Path.GetFileName(path);
        if (times.Length != Shape.Samples)
            throw new DataFaultException(name, $"{times.Length} samples", $"{Shape.Samples}, as in the first trace", "the file is cut short or of another run: export it again");
        double first = UnitTable.ToSi(times[0], _layout.TimeFactor), step = UnitTable.ToSi(EvenTimes.Step(name, times), _layout.TimeFactor);
        double start = _layout.Meaning == SampleMeaning.Instant ? Shape.OriginSeconds + 0.5 * Shape.TickSeconds : Shape.OriginSeconds;
        if (Math.Abs(first - start) > 0.01 * Shape.TickSeconds || Math.Abs(step / Shape.TickSeconds - 1) > 1e-6)
            throw new DataFaultException(name, $"times from {first:G6} s in steps of {step:G6} s", $"{start:G6} s and {Shape.TickSeconds:G6} s, as in the first trace", "export all shots with one time base");
        if (Whole && !whole) throw new DataFaultException(name, "samples that are no whole numbers", "whole numbers, as in the first trace", "export all shots in one way");
    }

    (double[] Times, double[] Values, bool Whole) ReadTrace(string path)
    {
        using var table = new CsvTable(path, _layout.Dialect);
        int time = table.Column(_layout.TimeColumn), value = table.Column(_layout.ValueColumn);
        var (times, values) = (new List<double>(), new List<double>());
        bool whole = true;
        while (table.Next())
        {
            times.Add(table.Number(time));
            whole = table.TryWhole(value, out int code) && whole;
            values.Add(whole ? code : table.Number(value));
        }
        return ([.. times], [.. values], whole);
    }

    /// <summary>A file of the folder: names that lead elsewhere are refused.</summary>
    static string Inside(string folder, string name)
    {
        if (name.Length == 0 || name != Path.GetFileName(name) || name is "." or "..")
            throw new DataFaultException(Path.GetFileName(folder), $"trace file \"{name}\"", "a file name without folders", "correct the shot table");
        string path = Path.Combine(folder, name);
        return File.Exists(path) ? path : throw new DataFaultException(Path.GetFileName(folder), $"no file \"{name}\"", "every trace of the shot table", string.Create(CultureInfo.InvariantCulture, $"copy the missing file, or remove its row"));
    }
}
