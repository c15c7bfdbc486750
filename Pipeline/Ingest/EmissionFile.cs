using System.Text.RegularExpressions;
using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Ingest;

/// <summary>Reads the record of a channel that sees the emission pulse: a CSV file with a time and a signal column.</summary>
public static partial class EmissionFile
{
    const int FewestSamples = 4;

    /// <param name="path">The file.</param>
    /// <param name="dialect">How it is written.</param>
    /// <param name="timeColumn">Name of the column, without the unit that may follow it in brackets.</param>
    /// <param name="timeUnit">Its unit; null: it stands in the header.</param>
    /// <param name="signalColumn">Name of the column; its unit does not matter.</param>
    /// <exception cref="DataFaultException">The file cannot be used.</exception>
    public static PulseRecord Read(string path, CsvDialect dialect, string timeColumn, string? timeUnit, string signalColumn)
    {
        string name = Path.GetFileName(path);
        using var table = new CsvTable(path, dialect);
        int time = table.Column(Header(table, timeColumn)), signal = table.Column(Header(table, signalColumn));
        double factor = Factor(name, table.Headers[time], timeUnit);
        var (times, signals) = (new List<double>(), new List<double>());
        while (table.Next())
        {
            double at = UnitTable.ToSi(table.Number(time), factor);
            if (times.Count > 0 && at <= times[^1]) throw new DataFaultException($"{table.Where}, column \"{table.Headers[time]}\"", FormattableString.Invariant($"{at:G6} s after {times[^1]:G6} s"), "rising times", "export the record again, sorted by time");
            times.Add(at);
            signals.Add(table.Number(signal));
        }
        return times.Count >= FewestSamples ? new PulseRecord(name, [.. times], [.. signals])
            : throw new DataFaultException(name, $"{times.Count} samples", $"at least {FewestSamples}", "export the whole record");
    }

    /// <summary>The header of this name, with or without a unit in brackets.</summary>
    static string Header(CsvTable table, string column) =>
        table.Headers.FirstOrDefault(h => h == column) ?? table.Headers.FirstOrDefault(h => WithUnit().Match(h) is { Success: true } m && m.Groups["name"].Value == column) ?? column;

    static double Factor(string name, string header, string? stated)
    {
        string? written = WithUnit().Match(header) is { Success: true } m ? m.Groups["unit"].Value : null;
        if ((stated ?? written) is not { } unit)
            throw new DataFaultException($"{name}, column \"{header}\"", "no unit", "a header such as \"time (us)\", or time_unit", "state the unit once");
        if (!UnitTable.TryFind(Dimension.Time, unit, out double factor))
            throw new DataFaultException($"{name}, column \"{header}\"", $"unit \"{unit}\"", $"one of {UnitTable.Accepted(Dimension.Time)}", "correct the unit");
        return stated is null || written is null || stated == written ? factor
            : throw new DataFaultException($"{name}, column \"{header}\"", $"unit \"{written}\" in the header and time_unit \"{stated}\"", "the same", "remove time_unit");
    }

    [GeneratedRegex(@"^(?<name>.*?)\s*[\(\[](?<unit>[^\)\]]*)[\)\]]$", RegexOptions.CultureInvariant, matchTimeoutMilliseconds: 1000)]
    private static partial Regex WithUnit();
}
