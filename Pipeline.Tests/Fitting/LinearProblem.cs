using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Tests.Fitting;

/// <summary>A textbook problem A x = y as the program's fits see it: one shot, no background.</summary>
static class LinearProblem
{
    /// <param name="rows">[bins][cells] A.</param>
    /// <param name="data">[bins] y.</param>
    /// <param name="variance">[bins] of y; null: y are Poisson counts.</param>
    public static Design Of(double[][] rows, double[] data, double[]? variance)
    {
        int cells = rows[0].Length, bins = rows.Length;
        var axis = new SignalAxis(0, 1e-6, [.. Enumerable.Range(0, bins + 1)]);
        var response = new ResponseMatrix(axis, new VelocityGrid(10, 10 + cells, 1), [.. Enumerable.Range(0, cells).Select(c => rows.Select(r => r[c]).ToArray())]);
        double[] nothing = new double[bins];
        var signal = new NetSignal
        {
            Axis = axis, Condition = "off", DetectorKind = variance is null ? DetectorKind.Counting : DetectorKind.Analog, Shots = 1, Total = data,
            Live = [.. nothing.Select(_ => 1.0)], Background = nothing, BackgroundVariance = nothing, TotalVariance = variance, Causes = [],
        };
        return new Design(new FitWindow(signal, 0, null), response);
    }

    /// <summary>[n * n] strength times the unit matrix.</summary>
    public static double[] Unit(int n, double strength)
    {
        var matrix = new double[n * n];
        for (int k = 0; k < n; k++) matrix[k * n + k] = strength;
        return matrix;
    }
}
