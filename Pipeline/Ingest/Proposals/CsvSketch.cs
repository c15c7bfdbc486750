using System.Globalization;
using System.Text;

namespace Pipeline.Ingest;

/// <summary>What a CSV file, or a folder of them, holds, and which layout it looks like.</summary>
static class CsvSketch
{
    const int Head = 1 << 20;

    public static FileSketch OfFile(string path)
    {
        CsvHead head = CsvHead.Of(path);
        string run = Path.GetFileNameWithoutExtension(path), folder = Path.GetDirectoryName(path) ?? "";
        string? table = FolderList.Of(folder.Length == 0 ? "." : folder, run + "*.csv").Select(f => Path.GetFileName(f)!).FirstOrDefault(f => f != Path.GetFileName(path) && f.Contains("shot", StringComparison.OrdinalIgnoreCase));
        // counts are whole: only the table of shots shows how decimals are written
        if (table is not null) head = head with { DecimalComma = head.DecimalComma || CsvHead.Of(Path.Combine(folder, table)).DecimalComma };
        return new FileSketch(head.Tree, table is null ? null : Wide(head, folder, run, table) ?? Long(head, path, folder, run, table));
    }

    /// <summary>A folder with a table of shots and one trace a shot.</summary>
    public static FileSketch OfFolder(string path)
    {
        string[] files = FolderList.Of(path, "*.csv");
        string? table = files.FirstOrDefault(f => Path.GetFileName(f).Contains("shots", StringComparison.OrdinalIgnoreCase));
        string? trace = files.FirstOrDefault(f => f != table);
        string[] tree = [string.Create(CultureInfo.InvariantCulture, $"{Path.GetFileName(Path.TrimEndingDirectorySeparator(path))}: {files.Length} CSV files")];
        if (table is null || trace is null) return new FileSketch(tree, null);
        CsvHead shots = CsvHead.Of(table), samples = CsvHead.Of(trace);
        string? fileColumn = shots.Header.FirstOrDefault(h => h.Contains("file", StringComparison.OrdinalIgnoreCase)), time = TimeColumn(samples);
        string? value = samples.Header.FirstOrDefault(h => h != time);
        if (fileColumn is null || time is null || value is null) return new FileSketch([.. tree, .. shots.Tree, .. samples.Tree], null);
        var roles = new Roles(shots.Header);
        (string kinds, string? unknown) = Roles.Kinds(Labels(table, samples with { SkipLines = 0 }, roles));
        string text = $$"""
            format = "csv-folder"

            {{samples.TableText}}
            [samples]
            time = { column = {{TomlText.Quote(time)}}, unit = "{{TimeUnit(time)}}" }
            value = {{TomlText.Quote(value)}}
            refers_to = "bin start"


            """;
        string shotText = roles.ShotsTable().Replace("[shots]\n", $"[shots]\nfile = {TomlText.Quote(Path.GetFileName(table))}\ntrace = {TomlText.Quote(fileColumn)}\n", StringComparison.Ordinal);
        return new FileSketch([.. tree, .. shots.Tree, .. samples.Tree], new Proposal(text + shotText + "\n" + kinds, [$"{fileColumn}: file of each shot", $"{time}: sampling time", $"{value}: samples", .. roles.Words], unknown));
    }

    static Proposal? Wide(CsvHead head, string folder, string run, string table)
    {
        string? time = TimeColumn(head);
        string[] shots = [.. head.Header.Where(h => h != time && h.Length > 0 && char.IsAsciiDigit(h[^1]))];
        if (time is null || shots.Length < 2 || shots.Length != head.Header.Count - 1) return null;
        string text = $$"""
            format = "csv-wide"

            {{head.TableText}}
            [samples]
            time = { column = {{TomlText.Quote(time)}}, unit = "{{TimeUnit(time)}}" }
            shot = {{TomlText.Quote(shots[0].TrimEnd([.. "0123456789"]) + "{number}")}}
            refers_to = "bin start"


            """;
        return Finish(text, head, folder, run, table, [$"{time}: sampling time", $"{shots[0]} ...: samples of one shot each"], null);
    }

    static Proposal? Long(CsvHead head, string path, string folder, string run, string table)
    {
        string? time = TimeColumn(head), shot = new Roles(head.Header).Of("number"), value = head.Header.FirstOrDefault(h => h != time && h != shot);
        if (head.Header.Count != 3 || time is null || shot is null || value is null) return null;
        (double start, double step, int samples) = TimesOf(path, head, time);
        string text = $$"""
            format = "csv-long"

            {{head.TableText}}
            [samples]
            shot = {{TomlText.Quote(shot)}}
            time = { column = {{TomlText.Quote(time)}}, unit = "{{TimeUnit(time)}}" }
            value = {{TomlText.Quote(value)}}
            start = {{TomlText.Time(start)}}
            step = {{TomlText.Time(step)}}
            samples = {{samples}}
            refers_to = "bin start"


            """;
        return Finish(text, head, folder, run, table, [$"{shot}: shot of the row", $"{time}: sampling time", $"{value}: counts"], null);
    }

    static Proposal Finish(string text, CsvHead head, string folder, string run, string table, string[] words, string? question)
    {
        CsvHead shots = CsvHead.Of(Path.Combine(folder, table));
        var roles = new Roles(shots.Header);
        (string kinds, string? unknown) = Roles.Kinds(Labels(Path.Combine(folder, table), head, roles));
        string file = table.Replace(run, "{run}", StringComparison.Ordinal);
        string shotText = roles.ShotsTable().Replace("[shots]\n", $"[shots]\nfile = {TomlText.Quote(file)}\n", StringComparison.Ordinal);
        return new Proposal(text + shotText + "\n" + kinds, [.. words, $"{table}: one row a shot", .. roles.Words], question ?? unknown);
    }

    static string[] Labels(string path, CsvHead head, Roles roles)
    {
        if (roles.Of("kind") is not { } kind) return [];
        using var table = new CsvTable(path, head.Dialect);
        int column = table.Column(kind);
        var labels = new List<string>();
        while (table.Next()) labels.Add(table.Text(column));
        return [.. labels];
    }

    /// <summary>First and last time over the file, and the smallest step between times of it.</summary>
    static (double Start, double Step, int Samples) TimesOf(string path, CsvHead head, string column)
    {
        using var table = new CsvTable(path, head.Dialect);
        int at = table.Column(column);
        double factor = Quantities.UnitTable.TryFind(Quantities.Dimension.Time, TimeUnit(column), out double f) ? f : 1;
        var times = new SortedSet<double>();
        while (table.Next()) times.Add(table.Number(at));
        double[] sorted = [.. times];
        double step = sorted.Zip(sorted.Skip(1), (a, b) => b - a).DefaultIfEmpty(1).Min();
        return (Quantities.UnitTable.ToSi(sorted[0], factor), Quantities.UnitTable.ToSi(step, factor), (int)Math.Round((sorted[^1] - sorted[0]) / step) + 1);
    }

    static string? TimeColumn(CsvHead head) => head.Header.FirstOrDefault(h => h.StartsWith("time", StringComparison.OrdinalIgnoreCase) || h is "t" or "t_s");

    static string TimeUnit(string column)
    {
        string unit = column.Contains('(', StringComparison.Ordinal) ? column[(column.IndexOf('(', StringComparison.Ordinal) + 1)..].TrimEnd(')', ' ') : column[(column.LastIndexOf('_') + 1)..];
        return Quantities.UnitTable.TryFind(Quantities.Dimension.Time, unit, out _) ? unit.Replace('µ', 'u').Replace('μ', 'u') : "s";
    }
}
