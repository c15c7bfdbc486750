using System.Globalization;
using MathNet.Numerics.LinearAlgebra;
using Pipeline.Statistics;

namespace Pipeline.Comparison;

/// <summary>By what factor all arrival times would have to be stretched, at free rate.</summary>
/// <remarks>Generalised least squares of data on the prediction and its derivative; linear, so a large stretch is found large but not exactly.</remarks>
sealed class ArrivalTimeQuestion : IQuestion
{
    public string Name => "arrival time";
    public bool NeedsAbsolute => false;

    public Answer Ask(ComparisonCase both)
    {
        var shape = Matrix<double>.Build.DenseOfColumnArrays(both.Predicted, both.Stretch);
        Vector<double> net = Vector<double>.Build.DenseOfArray([.. both.Total.Zip(both.Background, (t, b) => t - b)]);
        double rate = Math.Max(net.Sum() / both.Predicted.Sum(), 0.01);
        Matrix<double> data = Covariances.Of(both.DataVariance(rate), both.Causes);
        Matrix<double> simulated = Covariances.Of([.. both.PredictedVariance.Select(v => v * rate * rate)], []);
        Matrix<double> weight = (data + simulated).Inverse();
        Matrix<double> project = (shape.Transpose() * weight * shape).Inverse() * shape.Transpose() * weight;
        double stretch = (project * net)[1] / rate;
        double Part(Matrix<double> covariance) => Math.Sqrt((project * covariance * project.Transpose())[1, 1]) / rate;
        double systematic = Math.Sqrt(both.Nuisances.Sum(n => Square((project * Vector<double>.Build.DenseOfArray(n.Vector))[1])));
        (double statistical, double simulation) = (Part(data), Part(simulated));
        double error = Math.Sqrt(Square(statistical) + Square(simulation) + Square(systematic)), matters = both.Settings.TimeMatters;
        return new Answer
        {
            Condition = both.Condition, Question = Name, Measured = 1 + stretch, Predicted = 1, Statistical = statistical,
            Systematic = systematic, Simulation = simulation, PValue = Tail.NormalTwoSided(stretch / error),
            WouldHaveShown = Equivalence.Holds(stretch, error, matters),
            Finding = string.Create(CultureInfo.InvariantCulture,
                $"arrivals {Math.Abs(100 * stretch):F2} ± {100 * error:F2} % {(stretch >= 0 ? "later" : "earlier")} than predicted"),
            WhatWouldDecide = Equivalence.WhatWouldDecide(stretch, statistical, double.Hypot(systematic, simulation), matters),
        };
    }

    static double Square(double x) => x * x;
}

/// <summary>Covariances from their factors.</summary>
static class Covariances
{
    /// <summary>diag(variance) + sum of outer products.</summary>
    public static Matrix<double> Of(double[] variance, IEnumerable<double[]> causes)
    {
        Matrix<double> sum = Matrix<double>.Build.DenseOfDiagonalArray(variance);
        foreach (double[] cause in causes)
        {
            Vector<double> v = Vector<double>.Build.DenseOfArray(cause);
            sum += v.OuterProduct(v);
        }
        return sum;
    }
}
