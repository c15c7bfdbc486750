using MathNet.Numerics.LinearAlgebra;
using Pipeline.Statistics;

namespace Pipeline.Comparison;

/// <summary>By what factor the prediction would have to be stretched to fit best, at free rate.</summary>
/// <remarks>Generalised least squares of data on the prediction and its derivative; linear, so a large stretch is found large but not exactly.</remarks>
static class StretchFit
{
    /// <param name="both">Data and prediction.</param>
    /// <param name="question">Name of the question.</param>
    /// <param name="finding">Stretch and its error to words.</param>
    public static Answer Ask(ComparisonCase both, string question, Func<double, double, string> finding)
    {
        var shape = Matrix<double>.Build.DenseOfColumnArrays(both.Predicted, both.Stretch);
        Vector<double> net = Vector<double>.Build.DenseOfArray([.. both.Total.Zip(both.Background, (t, b) => t - b)]);
        double rate = Math.Max(net.Sum() / both.Predicted.Sum(), 0.01);
        Matrix<double> data = both.DataCovariance(rate), simulated = rate * rate * both.SimulationCovariance;
        Matrix<double> weight = (data + simulated).Inverse();
        Matrix<double> project = (shape.Transpose() * weight * shape).Inverse() * shape.Transpose() * weight;
        double stretch = (project * net)[1] / rate;
        double Part(Matrix<double> covariance) => Math.Sqrt((project * covariance * project.Transpose())[1, 1]) / rate;
        double systematic = Math.Sqrt(both.Nuisances.Sum(n => Square((project * Vector<double>.Build.DenseOfArray(n.Vector))[1])));
        (double statistical, double simulation) = (Part(data), Part(simulated));
        double error = Math.Sqrt(Square(statistical) + Square(simulation) + Square(systematic)), matters = both.StretchMatters;
        return new Answer
        {
            Condition = both.Condition, Question = question, Measured = 1 + stretch, Predicted = 1, Statistical = statistical,
            Systematic = systematic, Simulation = simulation, PValue = Tail.NormalTwoSided(stretch / error),
            WouldHaveShown = Equivalence.Holds(stretch, error, matters), Finding = finding(stretch, error),
            WhatWouldDecide = Equivalence.WhatWouldDecide(stretch, statistical, double.Hypot(systematic, simulation), matters),
        };
    }

    static double Square(double x) => x * x;
}
