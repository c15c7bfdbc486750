using System.Globalization;
using System.Text;

namespace Pipeline.Ingest;

/// <summary>The beginning of a CSV file: how it is written, and its column names.</summary>
sealed record CsvHead
{
    const int Bytes = 1 << 20;

    public required string Name { get; init; }
    public required IReadOnlyList<string> Header { get; init; }
    public required char Separator { get; init; }
    public required bool DecimalComma { get; init; }
    public required bool Latin1 { get; init; }
    public required int SkipLines { get; init; }
    public required IReadOnlyList<string> FirstLines { get; init; }

    public CsvDialect Dialect => new(Separator, '#', DecimalComma ? ',' : '.', Latin1, SkipLines);

    public IReadOnlyList<string> Tree =>
    [
        $"{Name}: separator {(Separator == '\t' ? "tab" : $"\"{Separator}\"")}, decimal {(DecimalComma ? "comma" : "point")}, {(Latin1 ? "Latin-1" : "UTF-8")}",
        $"  columns: {string.Join(", ", Header.Take(12))}{(Header.Count > 12 ? string.Create(CultureInfo.InvariantCulture, $", ... ({Header.Count} in all)") : "")}",
        .. FirstLines.Take(3).Select(l => "  " + (l.Length > 100 ? l[..100] + "..." : l)),
    ];

    /// <summary>The [table] of a layout.</summary>
    public string TableText
    {
        get
        {
            var text = new StringBuilder("[table]\n").Append(CultureInfo.InvariantCulture, $"separator = {(Separator == '\t' ? "\"tab\"" : TomlText.Quote(Separator.ToString()))}\ncomment = \"#\"\n");
            if (DecimalComma) text.Append("decimal = \"comma\"\n");
            if (Latin1) text.Append("encoding = \"latin-1\"\n");
            if (SkipLines > 0) text.Append(CultureInfo.InvariantCulture, $"skip_lines = {SkipLines}\n");
            return text.ToString();
        }
    }

    /// <exception cref="DataFaultException">The file cannot be opened, or holds no text lines.</exception>
    public static CsvHead Of(string path)
    {
        (string text, bool latin) = Text(path);
        string[] lines = [.. text.Split('\n').Select(l => l.TrimEnd('\r'))];
        int at = HeaderLine(lines, out char separator);
        if (at < 0) throw new DataFaultException(Path.GetFileName(path), "no line of column names followed by numbers", "a CSV file", "write the layout by hand");
        string[] first = [.. lines.Skip(at + 1).Where(l => l.Length > 0)];
        int comments = lines.Take(at).Count(l => l.StartsWith('#')), blank = lines.Take(at).Count(l => l.Length == 0);
        return new CsvHead
        {
            Name = Path.GetFileName(path), Header = [.. lines[at].Split(separator).Select(h => h.Trim().Trim('"'))], Separator = separator, Latin1 = latin,
            DecimalComma = separator != ',' && first.Take(50).Any(l => l.Split(separator).Any(f => f.Contains(',', StringComparison.Ordinal) && double.TryParse(f.Replace(',', '.'), CultureInfo.InvariantCulture, out _))),
            // comments are left out by the reader; anything else before the header has to be skipped
            SkipLines = comments + blank == at ? 0 : at, FirstLines = first,
        };
    }

    /// <summary>The first line without numbers that is followed by lines of as many fields, half of them numbers or more.</summary>
    static int HeaderLine(string[] lines, out char separator)
    {
        for (int at = 0; at + 1 < lines.Length && at < 200; at++)
        {
            if (lines[at].Length == 0 || lines[at][0] == '#') continue;
            string[] next = [.. lines.Skip(at + 1).Where(l => l.Length > 0 && l[0] != '#').Take(4)];
            foreach (char candidate in (char[])[';', '\t', ','])
            {
                string[] names = lines[at].Split(candidate);
                if (next.Length == 0 || names.Length < 2 || names.Any(IsNumber)) continue;
                if (!next.Select(l => l.Split(candidate)).All(v => v.Length == names.Length && 2 * v.Count(IsNumber) >= v.Length)) continue;
                separator = candidate;
                return at;
            }
        }
        separator = ',';
        return -1;
    }

    static bool IsNumber(string field) => double.TryParse(field.Replace(',', '.'), CultureInfo.InvariantCulture, out _);

    static (string Text, bool Latin1) Text(string path)
    {
        byte[] buffer = new byte[Bytes];
        int got;
        try
        {
            using FileStream file = File.OpenRead(path);
            got = file.ReadAtLeast(buffer, Bytes, throwOnEndOfStream: false);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(Path.GetFileName(path), $"a file that cannot be opened ({e.Message})", "a readable file", "check name and permission");
        }
        // a cut character at the end of the buffer is no sign of another encoding
        int whole = got == Bytes ? Array.LastIndexOf(buffer, (byte)'\n', got - 1) + 1 : got;
        try { return (new UTF8Encoding(false, throwOnInvalidBytes: true).GetString(buffer, 0, whole), false); }
        catch (DecoderFallbackException) { return (Encoding.Latin1.GetString(buffer, 0, whole), true); }
    }
}
