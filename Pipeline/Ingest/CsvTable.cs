using System.Buffers.Text;
using System.Globalization;
using System.Text;
using CsvHelper;

namespace Pipeline.Ingest;

/// <summary>A CSV file read record by record, strictly: every fault names file, line and column.</summary>
sealed class CsvTable : IDisposable
{
    readonly string _name;
    readonly CsvDialect _dialect;
    readonly FileStream _stream;
    readonly CsvReader _reader;

    /// <param name="path">The file.</param>
    /// <param name="dialect">How it is written.</param>
    public CsvTable(string path, CsvDialect dialect)
    {
        (_name, _dialect) = (Path.GetFileName(path), dialect);
        _stream = Open(path);
        SkipLines();
        _reader = CsvReader.Create(_stream, new CsvReaderOptions
        {
            Separator = dialect.Separator, CommentPrefix = dialect.Comment, Encoding = dialect.Latin1 ? Encoding.Latin1 : Encoding.UTF8, TrackLineNumbers = true, HasHeader = false, DetectSeparatorHint = false,
            AllowLineBreaksInQuotes = false, TrimWhitespace = true, FormatProvider = CultureInfo.InvariantCulture, BufferSize = 1 << 18,
        });
        if (!NextRecord()) throw new DataFaultException(_name, "no header line", "a line of column names", "export the file again");
        Headers = [.. Enumerable.Range(0, _reader.FieldCount).Select(_reader.GetString)];
    }

    public IReadOnlyList<string> Headers { get; }

    /// <summary>"run.csv, line 12".</summary>
    public string Where => $"{_name}, line {(_dialect.SkipLines + _reader.LineNumber).ToString(CultureInfo.InvariantCulture)}";

    public void Dispose()
    {
        _reader.Dispose();
        _stream.Dispose();
    }

    /// <summary>Moves to the next record, which must have as many fields as the header.</summary>
    public bool Next()
    {
        if (!NextRecord()) return false;
        if (_reader.FieldCount != Headers.Count)
            throw new DataFaultException(Where, $"{_reader.FieldCount} fields", $"{Headers.Count}, as in the header",
                "the file is damaged or still being written: export it again");
        return true;
    }

    /// <summary>Position of a column.</summary>
    public int Column(string header)
    {
        int found = -1;
        for (int k = 0; k < Headers.Count; k++)
        {
            if (Headers[k] != header) continue;
            if (found >= 0) throw new DataFaultException(_name, $"two columns \"{header}\"", "one", "rename one of them");
            found = k;
        }
        return found >= 0 ? found : throw new DataFaultException(_name, $"no column \"{header}\"",
            $"one of {string.Join(", ", Headers.Take(12).Select(h => $"\"{h}\""))}{(Headers.Count > 12 ? ", ..." : "")}", "name the right column in the layout");
    }

    public string Text(int column) => _reader.GetString(column);

    /// <summary>A finite number.</summary>
    public double Number(int column)
    {
        ReadOnlySpan<byte> field = _reader.GetSpan(column);
        if (TryParse(field, out double value) && double.IsFinite(value)) return value;
        throw new DataFaultException($"{Where}, column \"{Headers[column]}\"", field.Length == 0 ? "an empty field" : $"\"{(field.Length > 60 ? Encoding.UTF8.GetString(field[..60]) + "..." : _reader.GetString(column))}\"",
            $"a finite number with \"{_dialect.Decimal}\" before its decimals", "correct the field or export the file again");
    }

    /// <summary>A whole number that fits in 32 bits, if the field is one.</summary>
    public bool TryWhole(int column, out int value)
    {
        ReadOnlySpan<byte> field = _reader.GetSpan(column);
        return Utf8Parser.TryParse(field, out value, out int used) && used == field.Length && used > 0;
    }

    bool TryParse(ReadOnlySpan<byte> field, out double value)
    {
        value = 0;
        if (_dialect.Decimal != ',') return Utf8Parser.TryParse(field, out value, out int used) && used == field.Length;
        if (field.Length > 64 || field.Contains((byte)'.')) return false;
        Span<byte> point = stackalloc byte[field.Length];
        field.Replace(point, (byte)',', (byte)'.');
        return Utf8Parser.TryParse(point, out value, out int all) && all == field.Length;
    }

    void SkipLines()
    {
        for (int lines = 0; lines < _dialect.SkipLines;)
        {
            int next = _stream.ReadByte();
            if (next < 0) throw new DataFaultException(_name, $"{lines} lines", $"{_dialect.SkipLines} lines before the header", "correct skip_lines in the layout");
            if (next == '\n') lines++;
        }
    }

    bool NextRecord()
    {
        try { return _reader.Read(); }
        catch (CsvFormatException e)
        {
            throw new DataFaultException($"{_name}, line {e.LineNumber.ToString(CultureInfo.InvariantCulture)}", $"a record that is no CSV ({e.Message})",
                "one record a line, quotes closed", "correct the line or export the file again");
        }
    }

    static FileStream Open(string path)
    {
        try
        {
            var stream = new FileStream(path, new FileStreamOptions { Access = FileAccess.Read, Share = FileShare.Read, BufferSize = 1 << 12, Options = FileOptions.SequentialScan });
            if (stream.Length > 0) return stream;
            stream.Dispose();
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(Path.GetFileName(path), $"a file that cannot be opened ({e.Message})", "a readable CSV file", "check name and permission");
        }
        throw new DataFaultException(Path.GetFileName(path), "an empty file", "a CSV file", "wait until it is written, or export it again");
    }
}
