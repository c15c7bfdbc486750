using System.Globalization;
using System.Text.RegularExpressions;

namespace Pipeline.Tests.Numerics;

/// <summary>A nonlinear data set of the NIST Statistical Reference Datasets, as published (public domain), in Reference/.</summary>
sealed partial class NistSet
{
    public NistSet(string name)
    {
        string[] lines = File.ReadAllLines(Path.Combine(AppContext.BaseDirectory, "Reference", name + ".dat"));
        Match[] rows = [.. lines.Take(60).Select(l => ParameterRow().Match(l)).Where(m => m.Success)];
        Start1 = [.. rows.Select(m => Number(m.Groups[1].Value))];
        Start2 = [.. rows.Select(m => Number(m.Groups[2].Value))];
        Certified = [.. rows.Select(m => Number(m.Groups[3].Value))];
        Deviation = [.. rows.Select(m => Number(m.Groups[4].Value))];
        double[][] data = [.. lines.Skip(60).Select(l => l.Split(' ', StringSplitOptions.RemoveEmptyEntries)).Where(f => f.Length == 2)
            .Select(f => f.Select(Number).ToArray())];
        Y = [.. data.Select(d => d[0])];
        X = [.. data.Select(d => d[1])];
        SumOfSquares = Number(lines.First(l => l.StartsWith("Residual Sum of Squares:", StringComparison.Ordinal)).Split(':')[1]);
    }

    public double[] Start1 { get; }
    public double[] Start2 { get; }
    public double[] Certified { get; }
    public double[] Deviation { get; }
    public double[] X { get; }
    public double[] Y { get; }
    public double SumOfSquares { get; }

    static double Number(string text) => double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);

    [GeneratedRegex(@"^\s*b\d+\s*=\s+(\S+)\s+(\S+)\s+(\S+)\s+(\S+)\s*$")]
    private static partial Regex ParameterRow();
}
