using System.Globalization;
using MathNet.Numerics.Distributions;
using MathNet.Numerics.LinearAlgebra;
using Pipeline.Statistics;

namespace Pipeline.Comparison;

/// <summary>Chi-square of the whole signal at free rate, with the covariance of data, simulation and every common cause.</summary>
/// <remarks>Merged bins hold 25 predicted counts or more, so the asymptotic distribution serves. "Would have shown" asks for 90 % power
/// against a stretch of all arrival times, or of all velocities in a scan, by what matters.</remarks>
sealed class ShapeQuestion : IQuestion
{
    const double Power = 0.9;

    public string Name => "shape";
    public bool NeedsAbsolute => false;

    public Answer Ask(ComparisonCase both)
    {
        if (both.Bins < 2) return TooFewBins(both);
        Vector<double> net = Vector<double>.Build.DenseOfArray([.. both.Total.Zip(both.Background, (t, b) => t - b)]);
        Vector<double> predicted = Vector<double>.Build.DenseOfArray(both.Predicted);
        double start = Math.Max(net.Sum() / predicted.Sum(), 0.01);
        Matrix<double> weight = Covariance(both, start).Inverse();
        double rate = predicted * weight * net / (predicted * weight * predicted);
        Vector<double> residual = net - rate * predicted;
        double chiSquare = residual * weight * residual;
        int freedom = both.Bins - 1;
        double seen = SeenStretch(both, weight, predicted, start);
        double power = Tail.NoncentralChiSquare(ChiSquared.InvCDF(freedom, 1 - both.Settings.Level), freedom, seen);
        return new Answer
        {
            Condition = both.Condition, Question = Name, Measured = chiSquare, Predicted = freedom,
            Statistical = Math.Sqrt(2.0 * freedom), Systematic = 0, Simulation = 0,
            PValue = Tail.ChiSquare(chiSquare, freedom), WouldHaveShown = power >= Power,
            Finding = string.Create(CultureInfo.InvariantCulture, $"chi-square {chiSquare:F1} for {freedom} degrees of freedom at free rate"),
            WhatWouldDecide = string.Create(CultureInfo.InvariantCulture,
                $"the chance to see {(both.Scanned ? "velocities" : "arrivals")} {100 * both.StretchMatters:G3} % {(both.Scanned ? "high" : "late")} is {100 * power:F0} %, {100 * Power:F0} % are asked for"),
        };
    }

    Answer TooFewBins(ComparisonCase both) => new()
    {
        Condition = both.Condition, Question = Name, Measured = double.NaN, Predicted = double.NaN, Statistical = double.NaN, Systematic = 0, Simulation = 0,
        PValue = 1, WouldHaveShown = false, Finding = "all predicted counts fall into one bin, which has no shape", WhatWouldDecide = "finer bins would be needed",
    };

    static Matrix<double> Covariance(ComparisonCase both, double rate) => both.DataCovariance(rate) + rate * rate * both.SimulationCovariance
        + Covariances.Of(new double[both.Bins], [.. both.Nuisances.Select(n => n.Vector.Select(x => rate * x).ToArray())]);

    /// <summary>Noncentrality of a stretch that matters, with the rate profiled.</summary>
    static double SeenStretch(ComparisonCase both, Matrix<double> weight, Vector<double> predicted, double rate)
    {
        Vector<double> stretch = rate * both.StretchMatters * Vector<double>.Build.DenseOfArray(both.Stretch);
        double cross = stretch * weight * predicted;
        // never negative but by rounding, after Cauchy and Schwarz
        return Math.Max(0, stretch * weight * stretch - cross * cross / (predicted * weight * predicted));
    }
}
