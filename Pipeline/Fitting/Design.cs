using Pipeline.Numerics;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>The linear model of a window: counts = exposure * response * molecules + background + causes. Variables are the molecules of
/// each cell, then one amplitude with a unit normal prior for each common cause.</summary>
sealed class Design
{
    readonly double[][] _columns;
    readonly int[] _first;

    public Design(FitWindow window, ResponseMatrix response)
    {
        Window = window;
        Cells = response.Grid.Cells;
        IsScan = response.Axis.Points.Count > 0;
        IsBroad = IsScan && response.Axis.TimeBins == 1;
        Variables = Cells + window.Causes.Length;
        _columns = new double[Variables][];
        _first = new int[Variables];
        for (int c = 0; c < Cells; c++) (_first[c], _columns[c]) = Slice(window, response, c);
        for (int k = 0; k < window.Causes.Length; k++) _columns[Cells + k] = window.Causes[k];
        // a coupling capacitor makes columns whose sum is nothing
        double[] seen = [.. _columns.Take(Cells).Select(c => c.Sum(Math.Abs))];
        double typical = seen.Order().ElementAt(Cells / 2);
        double share = IsScan ? BlindInScan : BlindShare;
        Blind = [.. seen.Select(s => s <= share * typical)];
    }

    /// <summary>Cells that leave less than this share of the typical counts in the window are not seen.</summary>
    const double BlindShare = 0.05;

    /// <summary>The same in a scan: beyond its ends molecules leave the wings of their lines, which say nothing of their speed.</summary>
    const double BlindInScan = 0.35;

    /// <summary>[cells] whose molecules come before or after the window: held at zero, and named in the report.</summary>
    public bool[] Blind { get; }

    public FitWindow Window { get; }
    /// <summary>Whether the laser is scanned.</summary>
    public bool IsScan { get; }
    /// <summary>Whether the laser's frequency alone tells velocities apart: with lines that are wider than cells.</summary>
    public bool IsBroad { get; }
    public int Cells { get; }
    public int Variables { get; }

    /// <summary>[bins] expected counts.</summary>
    public double[] Means(ReadOnlySpan<double> x)
    {
        double[] means = [.. Window.Background];
        for (int c = 0; c < Variables; c++)
        {
            double value = x[c];
            if (value == 0) continue;
            double[] column = _columns[c];
            for (int k = 0; k < column.Length; k++) means[_first[c] + k] += value * column[k];
        }
        return means;
    }

    /// <summary>Adds A^T W A to <paramref name="h"/> ([variables * variables]).</summary>
    public void AddNormal(double[] weights, double[] h)
    {
        var weighted = new double[Window.Count];
        for (int a = 0; a < Variables; a++)
        {
            double[] columnA = _columns[a];
            for (int k = 0; k < columnA.Length; k++) weighted[k] = columnA[k] * weights[_first[a] + k];
            for (int b = 0; b <= a; b++)
            {
                int from = Math.Max(_first[a], _first[b]), to = Math.Min(_first[a] + columnA.Length, _first[b] + _columns[b].Length);
                if (from >= to) continue;
                double sum = Cholesky.Dot(weighted.AsSpan(from - _first[a], to - from), _columns[b].AsSpan(from - _first[b], to - from));
                h[a * Variables + b] += sum;
                if (a != b) h[b * Variables + a] += sum;
            }
        }
    }

    /// <summary>[variables] A^T W y.</summary>
    public double[] Project(double[] weights, double[] y)
    {
        var g = new double[Variables];
        for (int c = 0; c < Variables; c++)
        {
            double sum = 0;
            for (int k = 0; k < _columns[c].Length; k++) sum += _columns[c][k] * weights[_first[c] + k] * y[_first[c] + k];
            g[c] = sum;
        }
        return g;
    }

    /// <summary>[bins] A x for any sign of x, without the background.</summary>
    public double[] Apply(ReadOnlySpan<double> x) => [.. Means(x).Zip(Window.Background, (m, b) => m - b)];

    static (int First, double[] Column) Slice(FitWindow window, ResponseMatrix response, int cell)
    {
        ReadOnlySpan<double> whole = response.Column(cell);
        int start = response.First(cell), from = Math.Max(start, window.First), to = Math.Min(start + whole.Length, window.First + window.Count);
        if (from >= to) return (0, []);
        var part = new double[to - from];
        for (int k = 0; k < part.Length; k++) part[k] = whole[from - start + k] * window.Exposure[from - window.First + k];
        return (from - window.First, part);
    }
}
